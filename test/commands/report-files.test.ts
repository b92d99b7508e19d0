import {
  linkSync,
  lstatSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { InputError } from '../../src/errors.ts';
import { readPdf } from '../report/read-pdf.ts';
import { fakeIo } from './fake-io.ts';

const CHIP =
  '<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="20mm" viewBox="0 0 30 20"><rect id="chip-edge" width="30" height="20" fill="none" stroke="#000" stroke-width=".1"/><path id="lane" fill="none" stroke="#000" stroke-width="1" d="M5 10H25"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="25" cy="10" r="1"/></svg>';
const SHEET = `depth: 100 um
ports:
  in: { pressure: 1 kPa }
  out: open
targets: [ { channel: lane, flow: 5 uL/min, by: in } ]
tolerances: { depth: 5 % }
`;
const CASES = 'cases: { seed: {}, grow: { temperature: 37 degC }, rest: {} }\n';
const COMMANDS = ['check', 'pump', 'spread'] as const;

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'rillcheck-'));
  put('chip.svg', CHIP);
  put('chip.run.yaml', SHEET);
});

afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

function put(name: string, text: string): void {
  writeFileSync(join(folder, name), text);
}

async function rillcheck(...args: string[]) {
  const io = fakeIo(folder, { readStdin: async () => SHEET });
  const code = await run(args, io);
  return { code, out: io.stdout(), err: io.stderr() };
}

function filesIn(name: string): string[] {
  return readdirSync(join(folder, name)).sort();
}

describe('reports are named NAME[.COMMAND][.case-CASE].EXT', () => {
  const ALL = ['-f', 'pdf,svg,csv,json', '-o', 'out'];
  const few = (command: string): string[] => (command === 'spread' ? ['--draws', '10'] : []);

  it('check, pump and spread write different files, and the terminal says which', async () => {
    for (const command of COMMANDS) {
      const { out } = await rillcheck(command, 'chip.svg', ...ALL, ...few(command));
      const names = [...out.replace(/\n/g, ' ').matchAll(/written to out: (.*) $/g)].flatMap(([, list]) =>
        list.split(/,? +/),
      );
      expect(names.length).toBeGreaterThan(4);
      for (const name of names) expect(filesIn('out')).toContain(name);
    }
    expect(filesIn('out')).toEqual(
      [
        ...['json', 'pdf', 'reaches.csv', 'segments.csv', 'svg'].map((end) => `chip.${end}`),
        ...['json', 'pdf', 'reaches.csv', 'segments.csv', 'svg'].map((end) => `chip.pump.${end}`),
        ...['csv', 'json', 'pdf', 'reaches.csv', 'segments.csv', 'svg'].map((end) => `chip.spread.${end}`),
      ].sort(),
    );
  });

  it('what is of one case has it in its name; with --case that is everything', async () => {
    put('chip.run.yaml', `${SHEET}${CASES}`);
    await rillcheck('pump', 'chip.svg', '-f', 'pdf,svg,json', '-o', 'all');
    expect(filesIn('all')).toEqual([
      'chip.pump.case-grow.svg',
      'chip.pump.case-rest.svg',
      'chip.pump.case-seed.svg',
      'chip.pump.json',
      'chip.pump.pdf',
    ]);
    const { out } = await rillcheck('check', 'chip.svg', '--case', 'grow', '-f', 'pdf,csv,json', '-o', 'one');
    expect(filesIn('one')).toEqual([
      'chip.case-grow.json',
      'chip.case-grow.pdf',
      'chip.case-grow.reaches.csv',
      'chip.case-grow.segments.csv',
    ]);
    expect(out).toContain('written to one: chip.case-grow.pdf, chip.case-grow.reaches.csv');
  });

  it('cases whose names come out alike get a number, whichever is asked for', async () => {
    put('chip.run.yaml', `${SHEET}cases: { "a b": {}, a/b: {}, A_B: {} }\n`);
    const names = ['chip.case-A_B-3.svg', 'chip.case-a_b-2.svg', 'chip.case-a_b.svg'];
    await rillcheck('check', 'chip.svg', '-f', 'svg', '-o', 'all');
    expect(filesIn('all')).toEqual(names);
    for (const name of ['a b', 'a/b', 'A_B'])
      await rillcheck('check', 'chip.svg', '--case', name, '-f', 'svg', '-o', 'each');
    expect(filesIn('each')).toEqual(names);
  });

  it('draws carry the case in their name, and are written with the reports or not at all', async () => {
    put('chip.run.yaml', `${SHEET}${CASES}`);
    await rillcheck(
      'spread',
      'chip.svg',
      '--draws',
      '10',
      '-f',
      'csv',
      '--samples',
      'd/draws.csv',
      '--case',
      'seed',
    );
    expect(filesIn('d')).toEqual(['draws.case-seed.csv']);
    put('file', '');
    const { code } = await rillcheck(
      'spread',
      'chip.svg',
      '--draws',
      '10',
      '-f',
      'csv',
      '-o',
      'out',
      '--samples',
      'file/draws.csv',
    );
    expect(code).toBe(3);
    expect(filesIn('out')).toEqual([]);
    const alike = await rillcheck(
      'spread',
      'chip.svg',
      '--draws',
      '10',
      '-f',
      'csv',
      '-o',
      'new',
      '--samples',
      'new/CHIP.spread.case-seed.reaches.csv',
    );
    expect(alike.code).toBe(0);
    put('chip.run.yaml', SHEET);
    const same = await rillcheck(
      'spread',
      'chip.svg',
      '--draws',
      '10',
      '-f',
      'csv',
      '-o',
      'same',
      '--samples',
      'same/CHIP.spread.reaches.csv',
    );
    expect(same.code).toBe(2);
    expect(same.err).toMatch(/two files of this run would have this name/);
    expect(readdirSync(folder)).not.toContain('same');
  });

  it('nothing is said of files with --quiet, --json or --formats none', async () => {
    for (const args of [['-q'], ['--json', '-f', 'csv'], ['-f', 'none']])
      expect((await rillcheck('check', 'chip.svg', ...args)).out).not.toContain('written to');
  });
});

describe('exit codes: 2 before 3 before 1', () => {
  it('whatever is wrong with files, a layout, sheet or option that can not be used is 2; then a report not written is 3', async () => {
    put('file', '');
    const shut = ['-o', 'file'];
    put('hold.run.yaml', SHEET.replace('depth: 100 um\n', ''));
    const codeOf = async (args: readonly string[], env: Record<string, string> = {}): Promise<number> => {
      const io = fakeIo(folder);
      const world = Object.defineProperty({ ...io, env }, 'now', {
        get: () => {
          if ('SOURCE_DATE_EPOCH' in env) throw new InputError('SOURCE_DATE_EPOCH', 'is no time');
          return new Date(0);
        },
      });
      return run(args, world);
    };
    expect(await codeOf(['check', 'chip.svg', '-r', 'hold.run.yaml', '-f', 'none'])).toBe(1);
    expect(await codeOf(['check', 'chip.svg', '-r', 'hold.run.yaml', ...shut])).toBe(3);
    expect(
      await codeOf(['check', 'chip.svg', '-r', 'hold.run.yaml', ...shut], { SOURCE_DATE_EPOCH: 'x' }),
    ).toBe(2);
    for (const wrong of [
      ['--case', 'no'],
      ['--detail', 'all'],
      ['-f', 'docx'],
      ['-f', ','],
      ['--paper', 'a3'],
      ['--colour', 'taste'],
    ])
      for (const command of COMMANDS) expect(await codeOf([command, 'chip.svg', ...shut, ...wrong])).toBe(2);
    expect(await codeOf(['spread', 'chip.svg', ...shut, '--draws', '1'])).toBe(2);
    expect(await codeOf(['spread', 'chip.svg', ...shut, '--draws', '10'])).toBe(3);
    expect(
      await codeOf([
        'spread',
        'chip.svg',
        '-o',
        'out',
        '-f',
        'csv',
        '--draws',
        '10',
        '--samples',
        'file/x.csv',
      ]),
    ).toBe(3);
  });

  it('--detail says how deep JSON goes, on stdout and in files', async () => {
    const keys = async (detail: string): Promise<string[]> => {
      const { out } = await rillcheck(
        'check',
        'chip.svg',
        '--json',
        '--detail',
        detail,
        '-f',
        'json',
        '-o',
        'out',
      );
      expect(readFileSync(join(folder, 'out/chip.json'), 'utf8')).toBe(out);
      return ['ports', 'nodes', 'reaches', 'segments'].filter((key) => key in JSON.parse(out));
    };
    expect(await keys('ports')).toEqual(['ports']);
    expect(await keys('reaches')).toEqual(['ports', 'nodes', 'reaches']);
    expect(await keys('segments')).toEqual(['ports', 'nodes', 'reaches', 'segments']);
  });
});

describe('--case says which cases were not looked at', () => {
  it('on the terminal and in --quiet', async () => {
    put('chip.run.yaml', `${SHEET}${CASES}`);
    for (const command of COMMANDS)
      for (const more of [[], ['-q']]) {
        const few = command === 'spread' ? ['--draws', '10'] : [];
        const { out } = await rillcheck(command, 'chip.svg', '--case', 'grow', '-f', 'none', ...few, ...more);
        expect(out).toContain('1 of 3 cases: ready; not looked at: seed and rest\n');
      }
    expect((await rillcheck('check', 'chip.svg', '-q', '-f', 'none')).out).toMatch(/all 3 cases: ready\n$/);
  });

  it('on the first page of the PDF, and at the head of every page', async () => {
    put('chip.run.yaml', `${SHEET}${CASES}`);
    await rillcheck('check', 'chip.svg', '--case', 'grow', '-f', 'pdf', '-o', 'out');
    const { pages } = await readPdf(new Uint8Array(readFileSync(join(folder, 'out/chip.case-grow.pdf'))));
    const texts = pages.map((page) => page.texts.map(({ text }) => text).join(' '));
    expect(texts[0]).toContain(
      'Of this case alone. Not looked at: 2 other cases of the run sheet (seed and rest).',
    );
    for (const text of texts) expect(text).toContain('1 of 3 cases: ready; not looked at: seed and rest');
  });
});

describe('no command writes over a file it read: exit 2 with a way out', () => {
  /** Ends 2, says how to put it right in one line, and leaves everything as it is. */
  async function refused(args: readonly string[], way: RegExp): Promise<void> {
    const before = snapshot();
    const { code, out, err } = await rillcheck(...args);
    expect(`${code} ${err}`).toMatch(/^2 /);
    expect(err).toMatch(/was read, and .* would be written over it; nothing was written: /);
    expect(err).toMatch(way);
    expect(err.trim().split('\n')).toHaveLength(1);
    expect(out).toBe('');
    expect(snapshot()).toEqual(before);
  }

  /** Every name with its kind and content. */
  function snapshot(): string[] {
    return readdirSync(folder, { recursive: true, encoding: 'utf8' })
      .sort()
      .map((name) => {
        const info = lstatSync(join(folder, name));
        return `${name} ${info.isSymbolicLink()} ${info.isFile() ? readFileSync(join(folder, name), 'utf8') : ''}`;
      });
  }

  const few = (command: string): string[] => (command === 'spread' ? ['--draws', '10'] : []);
  const OUTPUTS = COMMANDS.flatMap((command) => {
    const stem = command === 'check' ? 'chip' : `chip.${command}`;
    const tables = ['reaches.csv', 'segments.csv', ...(command === 'spread' ? ['csv'] : [])];
    return [
      ...['svg', 'pdf', 'json'].map((end) => [command, end, `${stem}.${end}`] as const),
      ...tables.map((end) => [command, 'csv', `${stem}.${end}`] as const),
    ];
  });

  it.each(OUTPUTS)(
    '%s -f %s: %s is the layout, or a link to what was read',
    async (command, format, name) => {
      const args = ['-r', 'chip.run.yaml', '-f', format, ...few(command)];
      put(name, CHIP);
      await refused([command, name, '-o', '.', ...args], /choose another folder with --out/);
      await refused([command, join(folder, name), '-o', folder, ...args], /--out/);
      symlinkSync('.', join(folder, 'same'));
      await refused([command, `same/${name}`, '-o', '.', ...args], /--out/);
      await refused([command, name, '-o', 'same', ...args], /--out/);
      rmSync(join(folder, name));
      // what the report's name leads to, and what leads to it
      mkdirSync(join(folder, 'out'));
      put('drawn.svg', CHIP);
      const given = ['-o', 'out', ...args];
      for (const read of ['drawn.svg', 'chip.run.yaml'])
        for (const link of [linkSync, symlinkSync]) {
          link(join(folder, read), join(folder, 'out', name));
          await refused([command, 'drawn.svg', ...given], /--out/);
          rmSync(join(folder, 'out', name));
        }
      put(`out/${name}`, CHIP);
      symlinkSync(`out/${name}`, join(folder, 'led.svg'));
      await refused([command, 'led.svg', ...given], /--out/);
    },
  );

  it.each(OUTPUTS)(
    '%s -f %s: %s differs from the layout in letter case alone',
    async (command, format, name) => {
      const other = name.replace('chip', 'CHIP').replace(/[a-z]+$/, (end) => end.toUpperCase());
      put(other, CHIP);
      await refused(
        [command, other, '-o', '.', '-r', 'chip.run.yaml', '-f', format, ...few(command)],
        /--out/,
      );
    },
  );

  it('a folder that differs in letter case alone is another one, where the disk tells them apart', async () => {
    mkdirSync(join(folder, 'Out'));
    put('Out/chip.svg', CHIP);
    const { code } = await rillcheck(
      'check',
      'Out/chip.svg',
      '-r',
      'chip.run.yaml',
      '-o',
      'out',
      '-f',
      'svg',
    );
    expect(code).toBe(readdirSync(folder).includes('out') ? 0 : 2);
    expect(readFileSync(join(folder, 'Out/chip.svg'), 'utf8')).toBe(CHIP);
  });

  it('draws of a spread: over the layout, the run sheet, a link to one, before any report is written', async () => {
    symlinkSync('chip.run.yaml', join(folder, 'draws.csv'));
    for (const samples of ['chip.svg', 'CHIP.svg', './chip.run.yaml', 'draws.csv'])
      await refused(
        ['spread', 'chip.svg', '--draws', '10', '-o', 'out', '-f', 'pdf,csv', '--samples', samples],
        /name another file with --samples/,
      );
  });

  it('a first run sheet over its layout, also with --force', async () => {
    symlinkSync('chip.svg', join(folder, 'link.run.yaml'));
    for (const sheet of ['chip.svg', 'CHIP.SVG', './chip.svg', 'link.run.yaml'])
      for (const force of [[], ['--force']])
        await refused(['draft', 'chip.svg', '--run', sheet, ...force], /name another file with --run/);
  });

  it('the layout that gave the picture its name, with a run sheet from standard input or none', async () => {
    await refused(['check', 'chip.svg', '-o', '.', '-f', 'svg', '-r', '-'], /--out/);
    rmSync(join(folder, 'chip.run.yaml'));
    await refused(['check', 'chip.svg', '-o', '.', '-f', 'svg'], /--out/);
  });

  it('but over its own reports of before, and beside its inputs, it writes', async () => {
    for (let i = 0; i < 2; i++)
      expect((await rillcheck('check', 'chip.svg', '-o', '.', '-f', 'pdf,csv,json')).code).toBe(0);
    for (let i = 0; i < 2; i++)
      expect((await rillcheck('pump', 'chip.svg', '-o', '.', '-f', 'svg')).code).toBe(0);
    expect(readFileSync(join(folder, 'chip.svg'), 'utf8')).toBe(CHIP);
  });
});
