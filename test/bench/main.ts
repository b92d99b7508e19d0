import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { performance } from 'node:perf_hooks';
import { measureFactorisation } from './factorisation.ts';
import { type BigLayout, lanes, lattice, tree } from './layouts.ts';
import { measureSpread } from './spread.ts';
import { measureStages, STAGES, type StageTimes } from './stages.ts';

/**
 * npm run bench: everything the project claims of its speed, as ratios measured in this run. Nothing is asserted; numbers
 * depend on the machine, ratios much less. Argument: `start`, `size`, `report`, `peer`, `factor`, `spread` or nothing for all.
 */
export async function main(args: readonly string[]): Promise<void> {
  const wanted = args[0];
  if (!existsSync('dist/bin.js')) throw new Error('dist/ is missing: run npm ci, or npm run build');
  const folder = mkdtempSync(join(tmpdir(), 'rillcheck-bench-'));
  try {
    if (wanted === undefined || wanted === 'start') measureStart(folder);
    if (wanted === undefined || wanted === 'size') await measureSizes(folder);
    if (wanted === undefined || wanted === 'report') measureReports(folder);
    if (wanted === undefined || wanted === 'peer') measurePeer(folder);
    if (wanted === undefined || wanted === 'factor') measureFactorisation();
    if (wanted === undefined || wanted === 'spread') await measureSpread();
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function measureStart(folder: string): void {
  console.log('\nStart: median wall time of whole processes, as multiples of `node -e 0`');
  const rounds = 9;
  const commands: Record<string, readonly string[]> = {
    'node -e 0': ['-e', '0'],
    '--version': ['dist/bin.js', '--version'],
    'culture demo, PDF and SVG': [
      'dist/bin.js',
      'check',
      'layouts-demo/culture.svg',
      '--out',
      folder,
      '--quiet',
    ],
  };
  const times: Record<string, number[]> = {};
  // In turn, so that a slow spell of the machine meets all alike.
  for (let round = 0; round < rounds; round++) {
    for (const [name, args] of Object.entries(commands)) {
      const begin = performance.now();
      spawnSync(process.execPath, args, { stdio: 'ignore' });
      const list = times[name] ?? [];
      times[name] = list;
      list.push(performance.now() - begin);
    }
  }
  const base = median(times['node -e 0']);
  for (const [name, list] of Object.entries(times)) {
    console.log(
      `  ${name.padEnd(28)} ${median(list).toFixed(0).padStart(6)} ms   ${(median(list) / base).toFixed(2)} ×`,
    );
  }
}

const SIZES: readonly (readonly BigLayout[])[] = [
  [lattice(22), lattice(71), lattice(224)],
  [lanes(10, 100), lanes(100, 100), lanes(1000, 100)],
  [tree(8), tree(12), tree(15)],
];

async function measureSizes(folder: string): Promise<void> {
  console.log(
    '\nSize: seconds per stage in one process (second run), and the exponent of growth between the last two sizes',
  );
  for (const family of SIZES) {
    const rows: { layout: BigLayout; times: StageTimes; wall: number; memory: number }[] = [];
    for (const layout of family) {
      await measureStages(layout);
      const times = await measureStages(layout);
      rows.push({ layout, times, ...wholeProcess(folder, layout) });
    }
    console.log(
      `  ${'layout'.padEnd(16)} ${'segments'.padStart(9)} ${STAGES.map((stage) => stage.padStart(9)).join('')}  process s  peak MB`,
    );
    for (const { layout, times, wall, memory } of rows) {
      console.log(
        `  ${layout.name.padEnd(16)} ${String(times.segments).padStart(9)} ${STAGES.map((stage) => times.seconds[stage].toFixed(3).padStart(9)).join('')} ${wall.toFixed(2).padStart(10)} ${memory.toFixed(0).padStart(8)}`,
      );
    }
    const [, middle, large] = rows;
    const growth = Math.log(large.times.segments / middle.times.segments);
    const exponent = (a: number, b: number): string => (Math.log(b / a) / growth).toFixed(2);
    console.log(
      `  ${'exponent'.padEnd(16)} ${''.padStart(9)} ${STAGES.map((stage) => exponent(middle.times.seconds[stage], large.times.seconds[stage]).padStart(9)).join('')} ${exponent(middle.wall, large.wall).padStart(10)}`,
    );
  }
}

/** Wall time and peak memory of `check --json --detail ports` as a process of its own, nothing written. */
function wholeProcess(
  folder: string,
  layout: BigLayout,
  options: readonly string[] = ['--json', '--detail', 'ports'],
): { wall: number; memory: number } {
  const path = put(folder, layout);
  const program = `process.on('exit',()=>process.stderr.write('peak '+process.resourceUsage().maxRSS));process.argv.splice(1,0,'rillcheck');await import(${JSON.stringify(new URL(`file://${process.cwd()}/dist/bin.js`).href)})`;
  const begin = performance.now();
  const { stderr } = spawnSync(
    process.execPath,
    ['--input-type=module', '-e', program, '--', 'check', path, ...options],
    { stdio: ['ignore', 'ignore', 'pipe'], maxBuffer: 1 << 28 },
  );
  const wall = (performance.now() - begin) / 1000;
  return { wall, memory: Number(/peak (\d+)/.exec(stderr.toString())?.[1]) / 1024 };
}

function measureReports(folder: string): void {
  console.log('\nReports of 100 000 segments: seconds and peak memory of whole processes');
  for (const layout of [lattice(224), lanes(1000, 100)]) {
    for (const format of ['none', 'pdf', 'svg', 'csv,json']) {
      const { wall, memory } = wholeProcess(folder, layout, [
        '--out',
        folder,
        '--formats',
        format,
        '--quiet',
      ]);
      console.log(
        `  ${layout.name.padEnd(16)} ${format.padEnd(9)} ${wall.toFixed(2).padStart(6)} s ${memory.toFixed(0).padStart(5)} MB`,
      );
    }
  }
}

function measurePeer(folder: string): void {
  console.log(
    '\nPeer: whole process against a script of general-purpose parts (ElementTree, shapely, SciPy), in turn',
  );
  const probe = spawnSync('python3', ['-c', 'import shapely, scipy']);
  const python = probe.status === 0 ? 'python3' : '/usr/bin/python3';
  if (spawnSync(python, ['-c', 'import shapely, scipy']).status !== 0) {
    console.log(
      '  not measured: python3 with shapely and scipy is missing (Debian: python3-shapely python3-scipy)',
    );
    return;
  }
  for (const layout of [lattice(224), lanes(1000, 100)]) {
    const path = put(folder, layout);
    const own: number[] = [];
    const peer: number[] = [];
    for (let round = 0; round < 5; round++) {
      own.push(wholeProcess(folder, layout).wall);
      const begin = performance.now();
      const { stderr, status } = spawnSync(python, ['test/bench/peer.py', path], {
        stdio: ['ignore', 'ignore', 'pipe'],
      });
      if (status !== 0) throw new Error(`the peer failed: ${stderr.toString()}`);
      peer.push((performance.now() - begin) / 1000);
    }
    const ratios = own.map((time, k) => time / peer[k]);
    console.log(
      `  ${layout.name.padEnd(16)} ${median(own).toFixed(2)} s against ${median(peer).toFixed(2)} s: ${median(ratios).toFixed(2)} × (${Math.min(...ratios).toFixed(2)} to ${Math.max(...ratios).toFixed(2)})`,
    );
  }
}

function put(folder: string, layout: BigLayout): string {
  const path = join(folder, `${layout.name.replace(/[^a-z0-9]+/g, '-')}.svg`);
  writeFileSync(path, layout.svg);
  writeFileSync(path.replace(/\.svg$/, '.run.yaml'), layout.sheet);
  return path;
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)];
}
