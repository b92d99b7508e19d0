/** Against finite differences: each reach made longer and shorter by its bound, or by a hair of it, and the whole solved again. */
import { describe, expect, it } from 'vitest';
import type { Network } from '../../src/network/types.ts';
import { drivesOf } from '../../src/solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow, solveFlow } from '../../src/solve/flow-state.ts';
import { type JointShares, jointShares } from '../../src/solve/joint-share.ts';
import type { FlowState } from '../../src/solve/types.ts';
import { randomFrom } from './graphs.ts';
import { gridDrawing } from './grid-drawing.ts';
import { drawing, networkFrom } from './network-from.ts';

function sharesOf(network: Network, mostWork?: number): JointShares {
  const drives = drivesOf(network.chip);
  const factor = factorFlow(prepareFlow(network), kindsOf(drives));
  return jointShares(network, factor, drives, flowStateOf(factor, drives), mostWork);
}

/** The same by solving anew: what each reach's bound times `scale` moves, the worse way, all added up and scaled back. */
function sharesAnew(network: Network, scale: number): JointShares {
  const base = solveFlow(network);
  const names = ['portFlow', 'portPressure', 'reachFlow'] as const;
  const moved = names.map((name) => new Float64Array(base[name].length));
  for (let r = 0; r < network.reachCount; r++) {
    const bound = network.reachJointBoundMm[r] * scale;
    if (!(bound > 0)) continue;
    const [longer, shorter] = [bound, -bound].map((more): FlowState => {
      const reachDuctMm = network.reachDuctMm.slice();
      reachDuctMm[r] += more;
      return solveFlow({ ...network, reachDuctMm });
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
function randomGrid(seed: number): Network {
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

function expectClose(found: Float64Array, wanted: Float64Array, share: number, what: string): number {
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

describe('how far joints that are not resolved could move flows and pressures', () => {
  it('is what finite differences give, for every port and reach of 60 random chips, both ways', () => {
    let compared = 0;
    for (let seed = 1; seed <= 60; seed++) {
      const network = randomGrid(seed);
      const wanted = sharesAnew(network, 1e-3);
      const all = sharesOf(network);
      for (const name of ['portFlow', 'portPressure', 'reachFlow'] as const) {
        compared += expectClose(all[name], wanted[name], 1e-4, `seed ${seed} ${name}`);
        compared += expectClose(
          sharesOf(network, 200)[name],
          wanted[name],
          1e-4,
          `seed ${seed} adjoint ${name}`,
        );
      }
    }
    expect(compared).toBeGreaterThan(1300);
  });

  it('is what the whole bound moves, but for its second order', () => {
    for (let seed = 1; seed <= 10; seed++) {
      const network = randomGrid(seed);
      const wanted = sharesAnew(network, 1);
      const { portPressure, reachFlow } = sharesOf(network);
      expectClose(portPressure, wanted.portPressure, 0.1, `seed ${seed} port pressure`);
      expectClose(reachFlow, wanted.reachFlow, 0.1, `seed ${seed} reach flow`);
    }
  });

  it('reads ± 0 % nowhere that matters on a chip driven by flow: its pressures and the shares of its lanes move', () => {
    const svg = drawing(
      { head: 'M5 10H40', one: 'M20 10V30', two: 'M40 10V30', foot: 'M20 30H55' },
      { feed: [5, 10], waste: [55, 30] },
    ).replace('data-name="two"', 'data-name="two" stroke-width="0.3"');
    const network = networkFrom(svg, 'depth: 80 um\nports: { feed: { flow: 10 uL/min }, waste: open }\n');
    const shares = sharesOf(network);
    const [feed, waste] = ['feed', 'waste'].map((name) =>
      network.chip.ports.findIndex((port) => port.name === name),
    );
    expect(shares.portFlow[feed]).toBe(0);
    expect(shares.portFlow[waste]).toBe(0);
    expect(shares.portPressure[feed]).toBeGreaterThan(1e-3);
    expect(shares.portPressure[waste]).toBeNaN();
    for (let r = 0; r < network.reachCount; r++) {
      const isLane = ['one', 'two'].includes(network.chip.channels[network.reachChannel[r]].name);
      if (isLane) expect(shares.reachFlow[r]).toBeGreaterThan(1e-4);
    }
  });
});
