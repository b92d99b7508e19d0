/** The world fails: every run ends with its documented exit code, one line that says why, and no file in part. */
import { execFileSync, type SpawnSyncReturns, spawn, spawnSync } from 'node:child_process';
import {
  chmodSync,
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { runOn } from '../hostile/run-on.ts';

const DIST = join(import.meta.dirname, '../../dist');

/** The bundle is copied, so that a build during the tests does not pull it away. */
const COPY = existsSync(join(DIST, 'bin.js')) ? mkdtempSync(join(tmpdir(), 'rillcheck-dist-')) : null;
const BIN = join(COPY ?? DIST, 'bin.js');
const isRoot = process.getuid?.() === 0;
const NOBODY = 65534;

const CHIP = `<svg xmlns="http://www.w3.org/2000/svg" width="100mm" height="50mm" viewBox="0 0 100 50">
<path id="run" d="M5 10H60" fill="none" stroke="#000" stroke-width=".2"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="60" cy="10" r="1"/></svg>`;
const SHEET = 'depth: 50 um\nports:\n  in: { pressure: 10 kPa }\n  out: open\n';
const ALL = ['check', 'chip.svg', '-f', 'pdf,svg,csv,json'];

describe.skipIf(COPY === null)('the program as a process (skipped without dist/)', () => {
  let folder: string;
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'rillcheck-faults-'));
    cpSync(DIST, COPY!, { recursive: true });
    chmodSync(COPY!, 0o755);
    writeFileSync(join(COPY!, 'package.json'), '{ "type": "module" }');
    chmodSync(folder, 0o777);
    writeFileSync(join(folder, 'chip.svg'), CHIP);
    writeFileSync(join(folder, 'chip.run.yaml'), SHEET);
    const { svg, sheet } = ladder(200);
    writeFileSync(join(folder, 'large.svg'), svg);
    writeFileSync(join(folder, 'large.run.yaml'), sheet);
  });
  afterAll(() => {
    rmSync(folder, { recursive: true, force: true });
    rmSync(COPY!, { recursive: true, force: true });
  });

  const program = (
    argv: readonly string[],
    options: Parameters<typeof spawnSync>[2] = {},
  ): SpawnSyncReturns<string> =>
    spawnSync(process.execPath, [BIN, ...argv], {
      cwd: folder,
      timeout: 60_000,
      ...options,
      encoding: 'utf8',
    });
  const shell = (script: string): SpawnSyncReturns<string> =>
    spawnSync('bash', ['-c', script], {
      cwd: folder,
      timeout: 60_000,
      encoding: 'utf8',
      env: { ...process.env, NODE: process.execPath, BIN },
    });

  describe('a disk that is full', () => {
    const disk = canMount() ? mkdtempSync(join(tmpdir(), 'rillcheck-full-')) : null;
    afterAll(() => {
      if (disk === null) return;
      execFileSync('umount', [disk]);
      rmSync(disk, { recursive: true });
    });

    it.skipIf(disk === null)('takes no report in part (needs the right to mount a tmpfs)', () => {
      execFileSync('mount', ['-t', 'tmpfs', '-o', 'size=64k', 'tmpfs', disk!]);
      for (const argv of [ALL, ['check', 'large.svg', '-f', 'csv']]) {
        const { status, stderr } = program([...argv, '-o', join(disk!, 'reports')]);
        expect(status, stderr).toBe(3);
        expect(stderr).toMatch(/^rillcheck: .*: can't be written \(no space left on the disk\)/);
        expect(stderr.trim().split('\n')).toHaveLength(1);
        expect(filesIn(disk!)).toEqual([]);
      }
    });

    it.each(['check chip.svg --json', 'check chip.svg -f none', '--help', '--version'])(
      'behind stdout ends with exit code 3: %s',
      (argv) => {
        const { stdout } = shell(`"$NODE" "$BIN" ${argv} 2>&1 >/dev/full; echo "code $?"`);
        expect(stdout).toMatch(/^rillcheck: .*stdout.*no space left.*\ncode 3\n$/);
      },
    );

    it('or a file size limit: no report in part', () => {
      const { stdout } = shell(
        'ulimit -f 16; "$NODE" "$BIN" check large.svg -f csv -o limited >/dev/null 2>err; code=$?; cat err; echo "code $code"',
      );
      expect(stdout).toMatch(/^rillcheck: .*can't be written.*\ncode 3\n$/);
      expect(filesIn(join(folder, 'limited'))).toEqual([]);
    });
  });

  it.skipIf(!isRoot)('a read-only folder ends with exit code 3 (needs root, to run as nobody)', () => {
    const shut = join(folder, 'shut');
    mkdirSync(shut, { mode: 0o555 });
    for (const out of [shut, join(shut, 'deeper')]) {
      const { status, stderr } = program([...ALL, '-o', out], { uid: NOBODY, gid: NOBODY });
      expect(status, stderr).toBe(3);
      expect(stderr).toMatch(
        /^rillcheck: .*shut.*: can't be written \(permission denied\); choose another folder/,
      );
    }
    expect(filesIn(shut)).toEqual([]);
  });

  it.skipIf(!isRoot)(
    'a layout that may not be read ends with exit code 2 (needs root, to run as nobody)',
    () => {
      writeFileSync(join(folder, 'secret.svg'), CHIP, { mode: 0o600 });
      const { status, stderr } = program(['check', 'secret.svg'], { uid: NOBODY, gid: NOBODY });
      expect(status).toBe(2);
      expect(stderr).toMatch(/^rillcheck: secret\.svg: .*permission denied/);
    },
  );

  it.each(['/dev/null/x', 'chip.svg', 'chip.svg/x', 'a'.repeat(300)])(
    'an output folder %s ends with exit code 3',
    (out) => {
      const { status, stderr } = program([...ALL, '-o', out]);
      expect(status, stderr).toBe(3);
      expect(stderr.trim().split('\n')).toHaveLength(1);
      expect(readFileSync(join(folder, 'chip.svg'), 'utf8')).toBe(CHIP);
    },
  );

  it('a picture that would be written over the layout ends with exit code 2, with a way out', () => {
    const { status, stdout, stderr } = program(['check', 'chip.svg', '-o', '.', '-f', 'svg']);
    expect(status, stderr).toBe(2);
    expect(stdout).toBe('');
    expect(stderr).toMatch(/^rillcheck: chip\.svg: it was read, .*: choose another folder with --out/);
    expect(readFileSync(join(folder, 'chip.svg'), 'utf8')).toBe(CHIP);
  });

  it('whoever reads a report while it is written again finds it whole', async () => {
    const argv = ['check', 'large.svg', '-f', 'json,csv', '-o', 'watched'];
    expect(program(argv).status).toBeLessThan(2);
    const path = join(folder, 'watched/large.json');
    const whole = readFileSync(path, 'utf8');
    const child = spawn(process.execPath, [BIN, ...argv], { cwd: folder, stdio: 'ignore' });
    const ended = new Promise<number | null>((resolve) => child.on('exit', resolve));
    let looks = 0;
    while (child.exitCode === null) {
      if (readFileSync(path, 'utf8') !== whole) throw new Error('the report was there in part');
      looks++;
      await new Promise((resolve) => setTimeout(resolve, 1));
    }
    expect(await ended).toBeLessThan(2);
    expect(looks).toBeGreaterThan(0);
  });

  describe('Ctrl-C', () => {
    const argv = ['check', 'large.svg', '-f', 'pdf,svg,csv,json', '-o', 'stopped'];
    let wholeMs: number;
    beforeAll(() => {
      const start = performance.now();
      const { status, stderr } = program(argv);
      wholeMs = performance.now() - start;
      expect(status, stderr).toBeLessThan(2);
      rmSync(join(folder, 'stopped'), { recursive: true });
    }, 60_000);

    it.each([0.05, 0.15, 0.25, 0.35, 0.45, 0.55, 0.65, 0.75, 0.85, 0.95])(
      'after %f of a long run leaves all reports or none, and nothing temporary',
      async (share) => {
        const child = spawn(process.execPath, [BIN, ...argv], {
          cwd: folder,
          stdio: ['ignore', 'ignore', 'pipe'],
        });
        let stderr = '';
        child.stderr.setEncoding('utf8').on('data', (text: string) => {
          stderr += text;
        });
        const timer = setTimeout(() => child.kill('SIGINT'), share * wholeMs);
        const [code, signal] = await new Promise<[number | null, string | null]>((resolve) =>
          child.on('close', (...how) => resolve(how)),
        );
        clearTimeout(timer);
        const left = filesIn(join(folder, 'stopped'));
        rmSync(join(folder, 'stopped'), { recursive: true, force: true });
        // Before the program has begun, Node itself ends by the signal, which a shell shows as 130 too.
        if (code === 130 || signal === 'SIGINT') {
          expect(left).toEqual([]);
          expect(stderr).toBe(code === 130 ? 'rillcheck: interrupted; nothing was written\n' : '');
        } else {
          expect([code, stderr]).toEqual([
            expect.toSatisfy((value: unknown) => value === 0 || value === 1),
            '',
          ]);
          expect(left).toEqual([
            'large.json',
            'large.pdf',
            'large.reaches.csv',
            'large.segments.csv',
            'large.svg',
          ]);
        }
      },
      60_000,
    );
  });

  describe('a pipe that is closed', () => {
    it.each([
      ['after some of the JSON', '"$NODE" "$BIN" check large.svg --json 2>err | head -c 100'],
      ['at once', '"$NODE" "$BIN" check large.svg --json 2>err | true'],
      ['on stderr too', '"$NODE" "$BIN" check none.svg 2>&1 | true; true >err'],
      ['on stderr alone', '"$NODE" "$BIN" check chip.svg -f none 2>&1 >/dev/null | true; true >err'],
      ['under the help', '"$NODE" "$BIN" --help 2>err | head -n 1'],
    ])('%s ends quietly', (_, script) => {
      const { stdout, status } = shell(
        `set -o pipefail; ${script} >out; code=$?; cat err; echo "code $code"`,
      );
      expect(status).toBe(0);
      expect(stdout).toMatch(/^code [0123]\n$/);
    });
  });

  it('a date that is none ends with exit code 2 and one line', () => {
    const { status, stderr } = program(ALL, { env: { ...process.env, SOURCE_DATE_EPOCH: 'soon' } });
    expect(stderr).toMatch(/^rillcheck: SOURCE_DATE_EPOCH: "soon" is not a whole number of seconds.*\n$/);
    expect(status).toBe(2);
  });

  it('a run sheet from a stdin that is closed is an empty one', () => {
    const { stdout } = shell('"$NODE" "$BIN" check chip.svg -r - -f none -q <&- 2>&1; echo "code $?"');
    expect(stdout).toMatch(/code [12]\n$/);
    expect(stdout).not.toMatch(/^\s+at /m);
  });
});

describe('outputs that change under the program', () => {
  const files = { 'chip.svg': CHIP, 'chip.run.yaml': SHEET };

  it.each([
    ['a folder stands where a report should be', (cwd: string) => mkdirSync(join(cwd, 'reports/chip.svg'))],
    ['the folder is taken away', (cwd: string) => rmSync(join(cwd, 'reports'), { recursive: true })],
    ['the folder is renamed', (cwd: string) => renameSync(join(cwd, 'reports'), join(cwd, 'inner/moved'))],
    [
      'the temporary files are taken away',
      (cwd: string) => {
        for (const name of readdirSync(join(cwd, 'reports'))) rmSync(join(cwd, 'reports', name));
      },
    ],
  ])('%s: exit code 3', async (_, harm) => {
    let cwd = '';
    let isHarmed = false;
    const world = {
      // Asked for when all is written and nothing has its name yet.
      isInterrupted: () => {
        if (!isHarmed && existsSync(join(cwd, 'reports')) && readdirSync(join(cwd, 'reports')).length === 5) {
          isHarmed = true;
          harm(cwd);
        }
        return false;
      },
    };
    const ran = await runOn(files, ALL, world, (folder) => {
      cwd = folder;
    });
    expect(isHarmed).toBe(true);
    expect(ran.code, ran.err).toBe(3);
    expect(ran.err).toMatch(/^rillcheck: .*can't be written/);
    expect(
      [...ran.written.keys()].filter((path) => path.startsWith('reports') && path.endsWith('.tmp')),
    ).toEqual([]);
  });

  it.each([0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11])('Ctrl-C seen at question %i leaves nothing', async (n) => {
    let asked = 0;
    const ran = await runOn(files, ALL, { isInterrupted: () => asked++ >= n });
    if (ran.code === 130) expect([...ran.written.keys()]).toEqual([]);
    else expect(ran.written.size).toBe(5);
    expect(ran.code === 130 || asked <= n).toBe(true);
  });
});

function filesIn(folder: string): string[] {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map(({ name }) => name)
    .sort();
}

/** Two rails with rungs between them. */
function ladder(rungs: number): { readonly svg: string; readonly sheet: string } {
  const lines = Array.from(
    { length: rungs },
    (_, i) => `<path id="rung-${i}" d="M${10 + i} 10q3 5 0 10t0 10"/>`,
  );
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="${rungs + 20}mm" height="40mm" viewBox="0 0 ${rungs + 20} 40">
<g fill="none" stroke="#000" stroke-width=".2"><path id="top" d="M5 10H${rungs + 12}"/><path id="bottom" d="M8 30H${rungs + 15}"/>${lines.join('\n')}</g>
<circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="${rungs + 15}" cy="30" r="1"/></svg>`;
  return { svg, sheet: SHEET };
}

function canMount(): boolean {
  if (!isRoot) return false;
  const probe = mkdtempSync(join(tmpdir(), 'rillcheck-mount-'));
  const { status } = spawnSync('mount', ['-t', 'tmpfs', '-o', 'size=64k', 'tmpfs', probe]);
  if (status === 0) spawnSync('umount', [probe]);
  rmSync(probe, { recursive: true, force: true });
  return status === 0;
}
