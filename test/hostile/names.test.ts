/** Names are data: never markup, never a formula, never a path, never a line of their own on the terminal. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { describe, expect, it } from 'vitest';
import { readSvg } from '../../src/svg/read.ts';
import { hasChromium, openBrowser } from '../browser/chromium.ts';
import { faultsOf, runOn } from './run-on.ts';

const NAMES: Readonly<Record<string, string>> = {
  markup: '<script>window.ran = 1</script>',
  'the end of an element': '</text></svg><script>window.ran = 1</script>',
  'a handler': '" onload="window.ran = 1" x="',
  'a single quote': "' onmouseover='window.ran = 1",
  'a link': 'javascript:window.ran=1',
  CDATA: ']]><script>window.ran = 1</script><![CDATA[',
  'a comment': '--><script>window.ran = 1</script><!--',
  entities: '&lt;b&gt; &amp; &#60;script&#62;',
  'CSS text': '</style><style>*{display:none}',
  'line breaks': 'one\ntwo\r\nthree\u2028four',
  'right-to-left marks': 'lane\u202egnp.exe\u2066\u2069\u200f',
  'terminal colours': 'red\u009b31m',
  'a formula': '=HYPERLINK("http://example.org","x")',
  'a sum': '+1+1',
  'a minus': "-2+3+cmd|' /C calc'!A0",
  'an at sign': '@SUM(1)',
  'a tab before a formula': '\t=1+1',
  'a comma and a quote': 'a,"b",c',
  'a path': '../../etc/passwd',
  'an absolute path': '/etc/passwd',
  'a drive': 'C:\\\\Windows\\\\x',
  'a template': '$\u007bprocess.exit(1)} {{7*7}} %s %d $& $1',
  'a lone surrogate': 'a\ud800b',
  'letters of many scripts': 'Ω≈ç√∫ 漢字 עברית 👩‍🔬',
  'only spaces within': 'a  b',
};

function escaped(text: string): string {
  return text.replace(/[&<>"'\n\r\t\u0080-\u009f]/g, (c) => `&#${c.charCodeAt(0)};`);
}

function wellFormed(text: string): string {
  return text.replace(/[\ud800-\udfff]/gu, '\ufffd');
}

/** A chip on which everything that can have a name has this one. */
function files(name: string): Record<string, string> {
  const drawn = name.trim();
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="100mm" height="50mm" viewBox="0 0 100 50">
<title>${escaped(name)}</title>
<g data-name="${escaped(`${name} layer`)}"><path data-name="${escaped(`${name} run`)}" d="M5 10H60V30" fill="none" stroke="#000" stroke-width=".2"/></g>
<path data-name="${escaped(name)}" d="M20 10V40" fill="none" stroke="#000" stroke-width=".2"/>
<circle data-name="${escaped(name)}" cx="5" cy="10" r="1"/><circle data-name="${escaped(`${name} out`)}" cx="60" cy="30" r="1"/>
</svg>`;
  const quoted = (text: string): string => JSON.stringify(wellFormed(text));
  const sheet = `title: ${quoted(name)}
drawing: { number: ${quoted(name)}, revision: ${quoted(name)}, drawn_by: ${quoted(name)} }
depth: 50 um
layers: { ${quoted(`${drawn} layer`)}: { depth: 40 um } }
ports: { ${quoted(drawn)}: { pressure: 10 kPa }, ${quoted(`${drawn} out`)}: open }
accept: [{ rule: open-end, at: ${quoted(drawn)}, because: ${quoted(name)}, by: ${quoted(name)}, on: 2026-05-04 }]
cases: { ${quoted(name)}: { temperature: 37 degC }, other: { temperature: 20 degC } }
`;
  return { 'chip.svg': wellFormed(svg), 'chip.run.yaml': sheet };
}

/** In the browser: what of the picture could run or load something. */
const LOOK = `({
  ran: 'ran' in window,
  root: document.documentElement.localName,
  broken: document.querySelector('parsererror') !== null,
  scripts: document.querySelectorAll('script, foreignObject, iframe, image, animate, set, a').length,
  handlers: [...document.querySelectorAll('*')].flatMap((element) =>
    [...element.attributes].map(({ name }) => name).filter((name) => /^on/i.test(name))),
})`;

const ARGV = ['check', 'chip.svg', '-f', 'pdf,svg,csv,json'];

describe.each(Object.entries(NAMES))('%s as a name', (_, name) => {
  it('comes out as text in every report', async () => {
    const ran = await runOn(files(name), ARGV);
    expect(ran.code, ran.err).toBeLessThan(2);
    expect(faultsOf(ran, ARGV)).toEqual([]);
    expect(ran.out + ran.err).not.toMatch(
      /[\u0000-\u0009\u000b-\u001f\u007f-\u009f\u2028-\u202e\u2066-\u2069]/,
    );
    expect([...ran.written.keys()].filter((path) => !/^reports\/[^/\\\s"'<>|:]+$/.test(path))).toEqual([]);
    for (const [path, bytes] of ran.written) {
      if (path.endsWith('.csv')) expect(liveCells(bytes.toString())).toEqual([]);
      if (path.endsWith('.svg')) expectHarmless(bytes.toString(), path);
    }
  });
});

it('no two cases write to one file', async () => {
  const cases = ['a/b', 'a:b', 'a_b', 'A_B', '../b'].map(
    (name) => `  ${JSON.stringify(name)}: { temperature: 30 degC }\n`,
  );
  const sheet = `depth: 50 um\ncases:\n${cases.join('')}`;
  const content =
    '<path d="M5 10H60" fill="none" stroke="#000" stroke-width=".2"/><circle cx="5" cy="10" r="1"/>';
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="100mm" height="50mm" viewBox="0 0 100 50">${content}</svg>`;
  const argv = ['check', 'chip.svg', '-f', 'svg,csv'];
  const ran = await runOn({ 'chip.svg': svg, 'chip.run.yaml': sheet }, argv);
  expect(faultsOf(ran, argv)).toEqual([]);
  expect(ran.code, ran.err).toBeLessThan(2);
  // A file system may take upper and lower case for the same.
  expect(new Set([...ran.written.keys()].map((path) => path.toLowerCase())).size).toBe(5 * 3);
});

describe.skipIf(!hasChromium)(
  'the SVG that is written, opened in a browser (needs /usr/bin/chromium)',
  () => {
    it('runs nothing, asks for nothing and is whole, whatever the names', async () => {
      const { context, close } = await openBrowser();
      const folder = mkdtempSync(join(tmpdir(), 'rillcheck-names-'));
      try {
        const page = await context.newPage();
        const asked: string[] = [];
        const fired: string[] = [];
        page.on('request', (request) => void asked.push(request.url()));
        page.on('dialog', (dialog) => {
          fired.push(dialog.message());
          void dialog.dismiss();
        });
        for (const [what, name] of Object.entries(NAMES)) {
          const { written } = await runOn(files(name), ['check', 'chip.svg', '-f', 'svg']);
          for (const [path, bytes] of written) {
            const file = join(folder, 'shown.svg');
            writeFileSync(file, bytes);
            asked.length = 0;
            await page.goto(pathToFileURL(file).href);
            const seen = Object(await page.evaluate(LOOK));
            expect({ what, path, ...seen }).toEqual({
              what,
              path,
              ran: false,
              root: 'svg',
              broken: false,
              scripts: 0,
              handlers: [],
            });
            expect({ what, asked: asked.filter((url) => !url.endsWith('/shown.svg')) }).toEqual({
              what,
              asked: [],
            });
          }
        }
        expect(fired).toEqual([]);
      } finally {
        rmSync(folder, { recursive: true, force: true });
        await close();
      }
    }, 120_000);
  },
);

function expectHarmless(svg: string, path: string): void {
  expect(() => readSvg(svg, path)).not.toThrow();
  const tags = svg.match(/<[^!?][^>]*>/g) ?? [];
  expect(
    tags.filter((tag) =>
      /^<(?:script|foreignObject|iframe|image|animate|set|a)\b|\son\w+\s*=|javascript:/i.test(
        tag.replace(/"[^"]*"/g, '""'),
      ),
    ),
  ).toEqual([]);
}

/** Cells that a spreadsheet would run: text that begins like a formula. */
function liveCells(csv: string): string[] {
  const cells: string[] = [];
  const cell = /(?:^|,|\r?\n)(?:"((?:[^"]|"")*)"|([^",\r\n]*))/g;
  for (const [, quoted, plain] of csv.matchAll(cell))
    cells.push(quoted?.replaceAll('""', '"') ?? plain ?? '');
  return cells.filter((text) => /^[=+\-@\t\r]/.test(text) && !/^-?\d+(?:\.\d+)?(?:e[+-]?\d+)?$/i.test(text));
}
