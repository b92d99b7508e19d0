import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { isDraftable } from '../../src/draft/yaml-text.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { fakeIo } from './fake-io.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'rillcheck-'));
});

afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

function put(name: string, text: string): void {
  writeFileSync(join(folder, name), text);
}

function read(name: string): string {
  return readFileSync(join(folder, name), 'utf8');
}

async function rillcheck(...args: string[]) {
  const io = fakeIo(folder);
  const code = await run(args, io);
  return { code, out: io.stdout(), err: io.stderr() };
}

const DEMOS = new URL('../../layouts-demo/', import.meta.url).pathname;

describe('rillcheck draft', () => {
  it.each(readdirSync(DEMOS).filter((name) => name.endsWith('.svg')))(
    'drafts a run sheet for %s that check answers with what is missing, and with no other blocker than without one',
    async (name) => {
      put(name, readFileSync(join(DEMOS, name), 'utf8'));
      const bare = JSON.parse((await rillcheck('check', name, '--json')).out);
      const { code, out } = await rillcheck('draft', name);
      expect(code).toBe(0);
      const sheetName = name.replace('.svg', '.run.yaml');
      expect(out).toContain(`${sheetName} written`);
      const sheet = parseRunSheet(read(sheetName), sheetName);
      expect(Object.keys(sheet.ports).sort()).toEqual(
        bare.ports.map((port: { name: string }) => port.name).sort(),
      );
      const channels = new Set(bare.reaches.map((reach: { channel: string }) => reach.channel));
      for (const channel of channels) expect(Object.keys(sheet.channels)).toContain(channel);
      const drafted = JSON.parse((await rillcheck('check', name, '--json')).out);
      const blockers = (result: typeof bare): string[] => [
        ...new Set<string>(
          result.findings
            .filter(({ severity }: { severity: string }) => severity === 'blocker')
            .map(({ rule }: { rule: string }) => rule),
        ),
      ];
      expect(blockers(drafted)).toEqual(blockers(bare));
      expect(blockers(drafted)).toEqual(expect.arrayContaining(['missing-depth', 'unset-port']));
      const unset = drafted.findings.filter(({ rule }: { rule: string }) => rule === 'unset-port');
      expect(unset).toHaveLength(drafted.ports.length);
      for (const { names } of unset)
        expect(read(sheetName)).toMatch(new RegExp(`^ {2}${names[0]}: \\{\\} # fill in`, 'm'));
    },
  );

  it('tells the layers of what is drawn, however many shapes before it draw nothing', async () => {
    const nothing =
      '<path d="M0 0H9" stroke="none" fill="none"/><line x2="5" stroke="#000" stroke-width="0"/>';
    put(
      'gaps.svg',
      `<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="30mm" viewBox="0 0 30 30">${nothing}<g id="lanes">${nothing}<path data-name="lane" d="M5 15H25" fill="none" stroke="#000" stroke-width="0.4"/></g><g id="holes"><circle data-name="in" cx="5" cy="15" r="1"/><circle data-name="out" cx="25" cy="15" r="1"/></g></svg>`,
    );
    expect(await rillcheck('draft', 'gaps.svg')).toMatchObject({ code: 0, err: '' });
    const text = read('gaps.run.yaml');
    expect(text).toContain('  lanes: {} # fill in: { depth: 50 um }; 1 channel\n');
    expect(text).toContain('  lane: {} # 0.4 mm wide, in lanes\n');
    expect(text).toContain(
      '# ports_layer: holes # only circles of this layer are ports; all that were found lie in it\n',
    );
  });

  it('proposes planes for layers that cross, says what it assumes, and check then sees no crossing', async () => {
    const strokes = (d: string): string => `<path d="${d}" fill="none" stroke="#000" stroke-width="0.2"/>`;
    put(
      'valves.svg',
      `<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="30mm" viewBox="0 0 30 30"><g id="flow">${strokes('M2 15H28')}</g><g id="control">${strokes('M10 2V28')}${strokes('M20 2V28')}</g><g id="vents">${strokes('M15 2V14.9')}</g><g id="over">${strokes('M5 5L25 25')}</g></svg>`,
    );
    const crossed = async (): Promise<string[][]> =>
      JSON.parse((await rillcheck('check', 'valves.svg', '--json')).out).findings.flatMap(
        ({ rule, names }: { rule: string; names: string[] }) =>
          rule === 'layers-cross' ? [names.slice(0, 2)] : [],
      );
    expect(await crossed()).toEqual([
      ['control', 'over'],
      ['flow', 'control'],
      ['flow', 'over'],
    ]);
    await rillcheck('draft', 'valves.svg');
    const text = read('valves.run.yaml');
    expect(text).toMatch(/# assumed: flow and control cross in 2 places where neither ends/);
    const planes = Object.entries(parseRunSheet(text, 'valves.run.yaml').layers).map(([name, layer]) => [
      name,
      layer.kind === 'etched' ? layer.plane : '',
    ]);
    expect(planes).toEqual([
      ['flow', null],
      ['control', 'top'],
      ['vents', null],
      ['over', 'top-2'],
    ]);
    expect(await crossed()).toEqual([]);
  });

  it('is ready for a check once what it marks is filled in', async () => {
    put('culture.svg', readFileSync(join(DEMOS, 'culture.svg'), 'utf8'));
    await rillcheck('draft', 'culture.svg');
    const filled = read('culture.run.yaml')
      .replace(/^depth: #/m, 'depth: 120 um #')
      .replace(/^ {2}medium: \{\}/m, '  medium: { flow: 100 uL/min }')
      .replace(/^ {2}waste: \{\}/m, '  waste: open');
    put('culture.run.yaml', filled);
    const { code, err } = await rillcheck('check', 'culture.svg', '-f', 'none');
    expect(err).toBe('');
    expect(code).toBe(0);
  });

  it('offers every limit and tolerance with a comment of its own, and each line is good as it stands', async () => {
    put('culture.svg', readFileSync(join(DEMOS, 'culture.svg'), 'utf8'));
    const { out } = await rillcheck('draft', 'culture.svg', '-r', '-');
    const lines = out.split('\n');
    const offered = lines.slice(
      lines.findIndex((line) => line.startsWith('limits:')),
      lines.findIndex((line) => line.startsWith('# cases:')),
    );
    for (const line of offered.filter((text) => text.startsWith('#')))
      expect(line).toMatch(/^# {2}\w+: .+ # \w/);
    const sheet = parseRunSheet(offered.map((line) => line.replace(/^#/, '')).join('\n'), 'all.run.yaml');
    const { depthByLayer, widthBias, widthOwn, pressureByPort, flowByPort, ...given } =
      sheet.tolerances ?? {};
    for (const value of [...Object.values(sheet.limits), ...Object.values(given)])
      expect(value).not.toBeNull();
  });

  it('does not list pillars as ports, and tells them apart by the layer of the ports where it can', async () => {
    const posts = Array.from(
      { length: 40 },
      (_, i) => `<circle cx="${10 + (i % 10) * 2}" cy="${8 + Math.floor(i / 10)}" r=".3"/>`,
    );
    const chip = (holes: string): string =>
      `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20"><g id="lanes"><path id="wide" d="M4 10H36" fill="none" stroke="#000" stroke-width="5"/></g><g id="posts">${posts.join('')}</g>${holes}</svg>`;
    const ports = '<circle id="in" cx="4" cy="10" r="3"/><circle id="out" cx="36" cy="10" r="3"/>';
    put('posts.svg', chip(`<g id="holes">${ports}</g>`));
    const { out } = await rillcheck('draft', 'posts.svg', '-r', '-');
    expect(out).toContain(
      'ports_layer: holes # only circles of this layer are ports; assumed, for the 40 circles within wide look like pillars',
    );
    expect(out).toContain(
      '# 40 circles of 0.6 mm (in posts) within wide, where no channel ends, are taken for pillars and not listed',
    );
    expect(out).not.toContain('port-');
    expect(Object.keys(parseRunSheet(out, 'posts.run.yaml').ports)).toEqual(['in', 'out']);
    put('posts.run.yaml', out);
    const { findings } = JSON.parse((await rillcheck('check', 'posts.svg', '--json')).out);
    const rules = findings.map(({ rule }: { rule: string }) => rule);
    expect(rules.filter((rule: string) => rule === 'unset-port')).toHaveLength(2);
    expect(rules).toContain('obstacle');

    // Ports in no layer can't be told from pillars by one: nothing is assumed in the sheet.
    put('loose.svg', chip(ports));
    expect((await rillcheck('draft', 'loose.svg', '-r', '-')).out).toContain('# ports_layer: holes');
    // Two ports alone are ports, wherever they lie.
    put('two.svg', chip(ports).replace(posts.slice(2).join(''), '').replace(ports, ''));
    expect((await rillcheck('draft', 'two.svg', '-r', '-')).out).toContain('# port-1: 0.6 mm hole');
  });

  it('says how large a chip drawn in pixels is under both usual sizes of one', async () => {
    put(
      'px.svg',
      '<svg xmlns="http://www.w3.org/2000/svg" width="288" height="96"><path d="M9 9h90" fill="none" stroke="#000"/></svg>',
    );
    expect((await rillcheck('draft', 'px.svg', '-r', '-')).out).toContain(
      'the drawing is 76.2 by 25.4 mm at 96 pixels per inch (unit: 0.264583 mm), 101.6 by 33.87 mm at 72 (unit: 0.352778 mm)',
    );
  });

  it('never writes over a run sheet without --force, and then writes it anew', async () => {
    put('culture.svg', readFileSync(join(DEMOS, 'culture.svg'), 'utf8'));
    put('culture.run.yaml', 'depth: 50 um\n');
    const { code, out, err } = await rillcheck('draft', 'culture.svg');
    expect({ code, out }).toEqual({ code: 2, out: '' });
    expect(err).toBe(
      'rillcheck: culture.run.yaml: there is a run sheet already; it is left as it is (--force writes over it)\n',
    );
    expect(read('culture.run.yaml')).toBe('depth: 50 um\n');
    expect((await rillcheck('draft', 'culture.svg', '--force')).code).toBe(0);
    expect(read('culture.run.yaml')).toContain('fill in');
    expect(readdirSync(folder).sort()).toEqual(['culture.run.yaml', 'culture.svg']);
  });

  it('writes elsewhere or on stdout when asked, and the same bytes each time', async () => {
    put('culture.svg', readFileSync(join(DEMOS, 'culture.svg'), 'utf8'));
    const { out } = await rillcheck('draft', 'culture.svg', '-r', '-');
    await rillcheck('draft', 'culture.svg', '-r', 'first.run.yaml');
    expect(read('first.run.yaml')).toBe(out);
    expect(readdirSync(folder).sort()).toEqual(['culture.svg', 'first.run.yaml']);
  });

  it('says that a scale is missing where the drawing states none', async () => {
    put(
      'plain.svg',
      '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 100 100"><path fill="none" stroke="#000" d="M10 10H90"/><circle cx="10" cy="10" r="3"/></svg>',
    );
    const { out } = await rillcheck('draft', 'plain.svg', '-r', '-');
    expect(out).toMatch(/^unit: # fill in: size of one unit of the drawing/m);
    expect(out).toMatch(/^# port-1: .* has no name/m);
    expect(out).toContain('1 channel has no name');
    put('plain.run.yaml', out);
    const { out: json } = await rillcheck('check', 'plain.svg', '--json');
    expect(JSON.parse(json).findings.map(({ rule }: { rule: string }) => rule)).toEqual(
      expect.arrayContaining(['assumed-scale', 'missing-depth', 'unset-port']),
    );
  });

  it('takes names for data, whatever they hold: the sheet stays valid and means the same names', async () => {
    const name = fc.oneof(
      fc.string({ unit: 'binary', minLength: 1, maxLength: 12 }),
      fc.constantFrom(
        'yes',
        'null',
        '007',
        '1e3',
        '- a',
        '# b',
        'a: b',
        '{}',
        '[x',
        '&a',
        '*a',
        '!t',
        '%',
        '@',
        '`',
        '"',
        "'",
        '|',
        '>',
        '? k',
        'a\nports: open',
        '\u2028',
        '\u0085',
        '__proto__',
        'constructor',
        'a # b',
        '~',
        '=',
        '<<',
        'lane-*',
        'é',
        '💧',
        'x'.repeat(400),
      ),
    );
    await fc.assert(
      fc.asyncProperty(
        fc.uniqueArray(name, { minLength: 6, maxLength: 6, selector: (text) => text.trim() }),
        async (names) => {
          const clean = names.map((text) =>
            text.replace(/[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\u{10000}-\u{10ffff}]/gu, '?'),
          );
          const at = clean.map((text) => escapeXml(text));
          put(
            'names.svg',
            `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20"><g data-name="${at[0]}" fill="none" stroke="#000" stroke-width=".2"><path data-name="${at[1]}" d="M5 5H30"/><path data-name="${at[2]}" d="M5 10H30"/></g><circle data-name="${at[3]}" cx="5" cy="5" r=".5"/><circle data-name="${at[4]}" cx="30" cy="5" r=".5"/><circle data-name="${at[5]}" cx="5" cy="10" r=".5"/></svg>`,
          );
          const bare = await rillcheck('check', 'names.svg', '--json', '--detail', 'ports');
          if (bare.code === 2) return; // two ports of one name, once trimmed
          const { code, out } = await rillcheck('draft', 'names.svg', '-r', '-');
          expect(code).toBe(0);
          put('names.draft.yaml', out);
          const drafted = await rillcheck(
            'check',
            'names.svg',
            '-r',
            'names.draft.yaml',
            '--json',
            '--detail',
            'ports',
          );
          expect(drafted.err).toBe('');
          expect(drafted.code).toBe(1);
          const known = new Set<string>(
            JSON.parse(bare.out).ports.map((port: { name: string }) => port.name),
          );
          const ports = Object.keys(parseRunSheet(out, 'names.draft.yaml').ports);
          for (const port of ports) expect(known).toContain(port);
          for (const port of known)
            if (!/^port-\d+$/.test(port) && isDraftable(port)) expect(ports).toContain(port);
          rmSync(join(folder, 'names.draft.yaml'));
        },
      ),
      { seed: 11, numRuns: 150 },
    );
  }, 60_000);

  it('stays small enough to be read again for a drawing of very many channels', async () => {
    const lines = Array.from(
      { length: 20_000 },
      (_, i) => `<path data-name="a-rather-long-name-of-a-channel-${i}" d="M1 ${1 + i * 0.01}h5"/>`,
    );
    put(
      'many.svg',
      `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="220mm" viewBox="0 0 40 220"><g fill="none" stroke="#000" stroke-width=".001">${lines.join('')}</g></svg>`,
    );
    const { out } = await rillcheck('draft', 'many.svg', '-r', '-');
    expect(Buffer.byteLength(out)).toBeLessThan(1_000_000);
    expect(out).toContain('too many to list here');
    expect(() => parseRunSheet(out, 'many.run.yaml')).not.toThrow();
  });
});

function escapeXml(text: string): string {
  return text.replace(/[&<>"'\t\n\r]/g, (character) => `&#${character.charCodeAt(0)};`);
}
