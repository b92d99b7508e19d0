import { readFileSync } from 'node:fs';
import { performance } from 'node:perf_hooks';
import type { RunNetwork } from '../../src/asked/run-network.ts';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import type { Tolerances } from '../../src/runsheet/types.ts';
import { drivesOf } from '../../src/solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow } from '../../src/solve/flow-state.ts';
import { factorGraph, solveGraph } from '../../src/solve/graph.ts';
import { spreadOf } from '../../src/spread/spread.ts';
import { readSvg } from '../../src/svg/read.ts';
import { lattice } from './layouts.ts';

/** Draws per second of the whole sample, and of its linear algebra with the analysis kept against everything from scratch. */
export async function measureSpread(): Promise<void> {
  console.log('\nSpread: draws per second on one thread');
  const culture = made(
    'culture',
    readFileSync('layouts-demo/culture.svg', 'utf8'),
    readFileSync('layouts-demo/culture.run.yaml', 'utf8'),
  );
  await measure('culture demo', culture, 10_000, 2000);
  const { name, svg, sheet } = lattice(40);
  await measure(name, made(name, svg, `${sheet}tolerances: { depth: 5 %, width_own: 2 um }\n`), 200, 100);
}

interface Made extends RunNetwork {
  readonly tolerances: Tolerances;
}

function made(name: string, svg: string, sheetText: string): Made {
  const sheet = parseRunSheet(sheetText, `${name}.run.yaml`);
  if (sheet.tolerances === null) throw new Error(`${name} has no tolerances`);
  const layout = layOut(readSvg(svg, `${name}.svg`), `${name}.svg`);
  const { chip, run } = assembleChip({ layout, sheet, file: `${name}.svg` });
  return { network: buildNetwork(chip), run, tolerances: sheet.tolerances };
}

async function measure(
  name: string,
  { network, run, tolerances }: Made,
  draws: number,
  rounds: number,
): Promise<void> {
  await spreadOf({ network, run }, tolerances, { draws: Math.ceil(draws / 10), seed: 2 });
  const begin = performance.now();
  const spread = await spreadOf({ network, run }, tolerances, { draws, seed: 1 });
  const seconds = (performance.now() - begin) / 1000;
  const check = spread.outputs.reduce(
    (sum, { linearSd }) => sum + (Number.isNaN(linearSd) ? 0 : linearSd),
    0,
  );

  const drives = drivesOf(run);
  const kinds = kindsOf(drives);
  const scratch = median(rounds, () => {
    flowStateOf(factorFlow(prepareFlow(network, run), kinds), drives);
  });
  const factor = factorFlow(prepareFlow(network, run), kinds);
  const { graph } = factor.prepared;
  let kept = factor.graphFactor;
  const resistance = kept.resistance.slice();
  const load = {
    fixedPressure: new Float64Array(graph.nodeCount),
    injection: new Float64Array(graph.nodeCount),
  };
  drives.forEach((drive, port) => {
    const node = factor.prepared.driveNode[port];
    if (drive.kind === 'pressure') load.fixedPressure[node] = drive.pressurePa;
    if (drive.kind === 'flow') load.injection[node] += drive.flowM3s;
  });
  const again = median(rounds, () => {
    kept = factorGraph(kept.analysis, resistance, kept);
    solveGraph(kept, load);
  });
  console.log(
    `  ${name}: ${network.reachCount} reaches, ${spread.outputs.length} numbers followed: ${Math.round(draws / seconds)} draws/s (${draws} in ${seconds.toFixed(2)} s); ` +
      `factor and solve with the analysis kept ${ms(again)}, from scratch ${ms(scratch)}: ${(scratch / again).toFixed(1)} ×; checksum ${check.toPrecision(6)}`,
  );
}

/** Milliseconds of one call, the median of all. */
function median(rounds: number, call: () => void): number {
  const times = new Float64Array(rounds);
  for (let i = 0; i < rounds; i++) {
    const begin = performance.now();
    call();
    times[i] = performance.now() - begin;
  }
  return times.sort()[rounds >> 1];
}

function ms(milliseconds: number): string {
  return `${milliseconds.toPrecision(3)} ms`;
}
