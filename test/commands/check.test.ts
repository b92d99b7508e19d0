import { chmodSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { fakeIo } from './fake-io.ts';

const CHIP =
  '<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="20mm" viewBox="0 0 30 20"><rect id="chip-edge" width="30" height="20" fill="none" stroke="#000" stroke-width=".1"/><path id="lane" fill="none" stroke="#000" stroke-width="1" d="M5 10H25"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="25" cy="10" r="1"/></svg>';
const SHEET = 'depth: 100 um\nports:\n  in: { pressure: 1 kPa }\n  out: open\n';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'rillcheck-'));
});

afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

function put(name: string, text: string | Uint8Array): void {
  writeFileSync(join(folder, name), text);
}

async function check(...args: string[]) {
  const io = fakeIo(folder);
  const code = await run(['check', ...args], io);
  return { code, out: io.stdout(), err: io.stderr(), left: readdirSync(folder).sort() };
}

describe('rillcheck check', () => {
  it('ends 0 on a ready layout and writes the PDF and the SVG named after it', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { code, out, err } = await check('chip.svg', '-o', 'out');
    expect(err).toBe('');
    expect(code).toBe(0);
    expect(out).toMatch(/^chip\.svg {2}ready: 0 blockers/);
    expect(readdirSync(join(folder, 'out')).sort()).toEqual(['chip.pdf', 'chip.svg']);
  });

  it('ends 1 on hold, also without a run sheet, where the ports are unset', async () => {
    put('chip.svg', CHIP);
    const { code, out } = await check('chip.svg', '-f', 'none');
    expect(code).toBe(1);
    expect(out).toContain('unset-port');
    expect(out).toContain('missing-depth');
  });

  it('asks for another name where a port has one that no run sheet can hold', async () => {
    put('chip.svg', CHIP.replace('id="in"', 'id="__proto__"'));
    const { out } = await check('chip.svg', '-f', 'none');
    expect(out).toContain('give the circle another name than __proto__');
  });

  it('names reports after a run sheet that is not the layout’s own', async () => {
    put('chip.svg', CHIP);
    put('trial.run.yaml', SHEET);
    const { code } = await check('chip.svg', '-r', 'trial.run.yaml', '-o', 'out', '-f', 'csv,json');
    expect(code).toBe(0);
    expect(readdirSync(join(folder, 'out')).sort()).toEqual([
      'trial.json',
      'trial.reaches.csv',
      'trial.segments.csv',
    ]);
  });

  it('reads the run sheet from standard input for -', async () => {
    put('chip.svg', CHIP);
    const io = fakeIo(folder, { readStdin: async () => SHEET });
    expect(await run(['check', 'chip.svg', '-r', '-', '-f', 'none'], io)).toBe(0);
  });

  it('prints one JSON document and nothing else with --json, and writes no file', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { code, out, left } = await check('chip.svg', '--json');
    expect(code).toBe(0);
    const result = JSON.parse(out);
    expect(result.verdict).toBe('ready');
    expect(result.reaches[0].name).toBe('lane');
    expect(left).toEqual(['chip.run.yaml', 'chip.svg']);
  });

  it('leaves nodes, reaches and segments out with --detail ports', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { out } = await check('chip.svg', '--json', '--detail', 'ports');
    expect(Object.keys(JSON.parse(out))).not.toContain('reaches');
  });

  it('prints only the verdict with --quiet', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { out } = await check('chip.svg', '-q', '-f', 'none');
    expect(out.trim().split('\n')).toHaveLength(1);
  });

  it('writes the same bytes for the same inputs', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    for (const out of ['one', 'two']) await check('chip.svg', '-o', out, '-f', 'pdf,svg,csv,json');
    for (const name of readdirSync(join(folder, 'one'))) {
      expect(
        readFileSync(join(folder, 'one', name)).equals(readFileSync(join(folder, 'two', name))),
        name,
      ).toBe(true);
    }
  });

  it('draws and solves only the case asked for, and answers an unknown one with the nearest', async () => {
    put('chip.svg', CHIP);
    put(
      'chip.run.yaml',
      `${SHEET}cases:\n  fast: { ports: { in: { pressure: 5 kPa } } }\n  slow: { ports: { in: { flow: 1 uL/min } } }\n`,
    );
    const { out } = await check('chip.svg', '--json', '--case', 'slow');
    expect(JSON.parse(out).cases.map((one: { case: string }) => one.case)).toEqual(['slow']);
    const wrong = await check('chip.svg', '--case', 'slo');
    expect(wrong.code).toBe(2);
    expect(wrong.err).toContain('did you mean "slow"');
  });
});

describe('input that cannot be used ends 2 with one line and writes nothing', () => {
  const layouts: Record<string, readonly [string | Uint8Array, RegExp]> = {
    'an empty file': ['', /chip\.svg.*(empty|no element)/i],
    'text that is not XML': ['hello chip', /chip\.svg/],
    'XML that is not SVG': ['<chip/>', /svg/i],
    'a cut-off SVG': [CHIP.slice(0, 200), /chip\.svg/],
    'rubbish in d': [CHIP.replace('M5 10H25', 'M5 10 banana'), /banana/],
    'NaN in d': [CHIP.replace('M5 10H25', 'M5 10 LNaN 3'), /NaN/],
    '1e400 in d': [CHIP.replace('M5 10H25', 'M5 10 L1e400 3'), /1e400/],
    'bytes that are no text': [Uint8Array.from([0x3c, 0xff, 0xfe, 0x80]), /UTF-8/],
  };
  for (const [name, [content, message]] of Object.entries(layouts)) {
    it(name, async () => {
      put('chip.svg', content);
      put('chip.run.yaml', SHEET);
      const { code, err, out, left } = await check('chip.svg', '-o', 'out');
      expect(code).toBe(2);
      expect(err.trim().split('\n')).toHaveLength(1);
      expect(err).toMatch(message);
      expect(err).not.toMatch(/\bat .*\.ts/);
      expect(out).toBe('');
      expect(left).not.toContain('out');
    });
  }

  const sheets: Record<string, readonly [string, RegExp]> = {
    'a tab': ['depth:\t100 um\nports:\n\tin: open\n', /chip\.run\.yaml:\d+.*tab/i],
    'a wrong unit': ['depth: 100 kPa\n', /chip\.run\.yaml:1: depth.*100 kPa/],
    'a bare number': ['depth: 100\n', /chip\.run\.yaml:1: depth.*"100" has no unit.*write/],
    'a negative depth': ['depth: -5 um\n', /chip\.run\.yaml:1: depth/],
    'an unknown port': [`${SHEET}  inn: open\n`, /chip\.run\.yaml:5.*inn.*"?in"?/],
    'an unknown key': ['deph: 100 um\n', /chip\.run\.yaml:1.*deph.*depth/],
    'a decimal comma': ['depth: 0,1 mm\n', /comma/i],
    'a plus-minus': ['depth: 100 ± 5 um\n', /±/],
    'water out of range': [`${SHEET}temperature: 150 degC\n`, /chip\.run\.yaml:5/],
  };
  for (const [name, [content, message]] of Object.entries(sheets)) {
    it(`a run sheet with ${name}`, async () => {
      put('chip.svg', CHIP);
      put('chip.run.yaml', content);
      const { code, err, left } = await check('chip.svg', '-o', 'out');
      expect(err).toMatch(message);
      expect(err.trim().split('\n')).toHaveLength(1);
      expect(code).toBe(2);
      expect(left).not.toContain('out');
    });
  }

  it('a missing layout, a folder, a missing run sheet', async () => {
    expect((await check('no.svg')).err).toContain('no.svg: there is no such layout file');
    mkdirSync(join(folder, 'dir.svg'));
    expect((await check('dir.svg')).err).toContain('dir.svg: this is a folder');
    put('chip.svg', CHIP);
    const { code, err } = await check('chip.svg', '-r', 'no.yaml');
    expect(code).toBe(2);
    expect(err).toContain('no.yaml: there is no such run sheet file');
  });

  it('an unknown option, format, command or nothing at all', async () => {
    put('chip.svg', CHIP);
    const option = await check('chip.svg', '--detial', 'ports');
    expect(option.code).toBe(2);
    expect(option.err).toContain('--detail');
    expect((await check('chip.svg', '-f', 'docx')).err).toContain('"docx" is no format');
    const io = fakeIo(folder);
    expect(await run([], io)).toBe(2);
    expect(io.stderr()).toContain('usage: rillcheck');
    const wrong = fakeIo(folder);
    expect(await run(['chek', 'chip.svg'], wrong)).toBe(2);
    expect(wrong.stderr()).toContain('check');
  });
});

describe('a report that cannot be written ends 3 and leaves no half file', () => {
  it('where a file stands in place of the folder', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    put('out', 'a file');
    const { code, err, left } = await check('chip.svg', '-o', 'out');
    expect(code).toBe(3);
    expect(err).toMatch(/out.*can't be written/);
    expect(left).toEqual(['chip.run.yaml', 'chip.svg', 'out']);
  });

  it.skipIf(process.platform !== 'linux')(
    'where no folder can be made (/proc; skipped off Linux)',
    async () => {
      put('chip.svg', CHIP);
      put('chip.run.yaml', SHEET);
      const { code, err } = await check('chip.svg', '-o', '/proc/rillcheck');
      expect(code).toBe(3);
      expect(err).toContain('no folder can be made there');
    },
  );

  it('makes the folders above the one named', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    expect((await check('chip.svg', '-o', 'a/b/c', '-f', 'csv')).code).toBe(0);
    expect(readdirSync(join(folder, 'a/b/c'))).toHaveLength(2);
  });

  it('where a folder stands in place of one of the files: none of them is written', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    mkdirSync(join(folder, 'out', 'chip.reaches.csv', 'x'), { recursive: true });
    const { code } = await check('chip.svg', '-o', 'out', '-f', 'csv,json');
    expect(code).toBe(3);
    expect(readdirSync(join(folder, 'out')).filter((name) => name.includes('tmp'))).toEqual([]);
  });

  it.skipIf(process.getuid?.() === 0)(
    'where the folder is read-only (skipped for root, who may write anywhere)',
    async () => {
      put('chip.svg', CHIP);
      put('chip.run.yaml', SHEET);
      mkdirSync(join(folder, 'out'));
      chmodSync(join(folder, 'out'), 0o500);
      const { code, err } = await check('chip.svg', '-o', 'out');
      expect(code).toBe(3);
      expect(err).toContain('permission denied');
    },
  );
});

describe('interruption', () => {
  it('ends 130 and writes nothing', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    let stages = 0;
    const io = fakeIo(folder, { isInterrupted: () => ++stages > 4 });
    expect(await run(['check', 'chip.svg', '-o', 'out'], io)).toBe(130);
    expect(io.stderr()).toBe('rillcheck: interrupted; nothing was written\n');
    expect(readdirSync(folder)).not.toContain('out');
  });
});

describe('help', () => {
  it('says what the program is for, its commands, examples and exit codes', async () => {
    const io = fakeIo(folder);
    expect(await run(['--help'], io)).toBe(0);
    for (const word of ['check', 'Examples:', 'Exit codes:', '130']) expect(io.stdout()).toContain(word);
  });

  it('prints the version of package.json', async () => {
    const io = fakeIo(folder);
    expect(await run(['--version'], io)).toBe(0);
    const { version } = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8'));
    expect(io.stdout().trim()).toBe(version);
  });
});
