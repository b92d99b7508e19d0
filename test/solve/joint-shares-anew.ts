import { expect } from 'vitest';
import type { RunNetwork } from '../../src/asked/run-network.ts';
import { drivesOf } from '../../src/solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow, solveFlow } from '../../src/solve/flow-state.ts';
import { type JointShares, jointShares } from '../../src/solve/joint-share.ts';
import type { FlowState } from '../../src/solve/types.ts';
import { randomFrom } from './graphs.ts';
import { gridDrawing } from './grid-drawing.ts';
import { networkFrom } from './network-from.ts';

export function sharesOf({ network, run }: RunNetwork, mostWork?: number): JointShares {
  const drives = drivesOf(run);
  const factor = factorFlow(prepareFlow(network, run), kindsOf(drives));
  return jointShares({ network, run }, factor, drives, flowStateOf(factor, drives), mostWork);
}

/** The same by solving anew: what each reach's bound times `scale` moves, the worse way, all added up and scaled back. */
export function sharesAnew({ network, run }: RunNetwork, scale: number): JointShares {
  const base = solveFlow(network, run);
  const names = ['portFlow', 'portPressure', 'reachFlow'] as const;
  const moved = names.map((name) => new Float64Array(base[name].length));
  for (let r = 0; r < network.reachCount; r++) {
    const bound = network.reachJointBoundMm[r] * scale;
    if (!(bound > 0)) continue;
    const [longer, shorter] = [bound, -bound].map((more): FlowState => {
      const reachDuctMm = network.reachDuctMm.slice();
      reachDuctMm[r] += more;
      return solveFlow({ ...network, reachDuctMm }, run);
    });
    names.forEach((name, k) => {
      for (let i = 0; i < moved[k].length; i++)
        moved[k][i] += Math.abs(longer[name][i] - shorter[name][i]) / 2 / scale || 0;
    });
  }
  const share = (k: number): Float64Array => moved[k].map((value, i) => value / Math.abs(base[names[k]][i]));
  return { portFlow: share(0), portPressure: share(1), reachFlow: share(2) };
}

/** A grid with ports of all kinds, with and without tubing, at its corners and sides; one part of its width and depths unequal. */
export function randomGrid(seed: number): RunNetwork {
  const random = randomFrom(seed);
  const pick = <T>(of: readonly T[]): T => of[Math.floor(random() * of.length)];
  const { svg, ports } = gridDrawing(
    2 + Math.floor(random() * 3),
    2 + Math.floor(random() * 2),
    () => pick([0.2, 0.2, 0.3]),
    () => pick([50, 50, 80]),
  );
  const conditions = ports.map((port, i) => {
    const tubing = random() < 0.5 ? ', tubing: { bore: 0.15 mm, length: 100 mm }' : '';
    const drive =
      i === 0
        ? `flow: ${(1 + 9 * random()).toFixed(2)} uL/min`
        : i === ports.length - 1
          ? 'pressure: 100 Pa'
          : pick(['pressure: 3 kPa', 'flow: -1 uL/min', 'head: 20 mm', '']);
    return drive === '' ? `  ${port}: sealed` : `  ${port}: { ${drive}${tubing} }`;
  });
  const joints = random() < 0.2 ? 'joints: centreline\n' : '';
  return networkFrom(
    svg,
    `${joints}ports:\n${conditions.join('\n')}\nchannels: { "e*": { flow: { min: 0 uL/min } } }\n`,
  );
}

/** Asserts that shares agree to a share of themselves; returns how many there were to compare. */
export function expectClose(found: Float64Array, wanted: Float64Array, share: number, what: string): number {
  let compared = 0;
  found.forEach((value, i) => {
    // a flow that only rounding leaves has no share worth comparing
    if (Number.isNaN(value) || !Number.isFinite(wanted[i]) || wanted[i] > 1e6) return;
    expect(Math.abs(value - wanted[i]), `${what}[${i}]: ${value}, ${wanted[i]}`).toBeLessThan(
      share * wanted[i] + 1e-9,
    );
    compared++;
  });
  return compared;
}
