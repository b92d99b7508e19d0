/** Against finite differences: each reach made longer and shorter by its bound, or by a hair of it, and the whole solved again. */
import { describe, expect, it } from 'vitest';
import { expectClose, randomGrid, sharesAnew, sharesOf } from './joint-shares-anew.ts';
import { drawing, networkFrom } from './network-from.ts';

describe('how far joints that are not resolved could move flows and pressures', () => {
  it('is what finite differences give, for every port and reach of 60 random chips, both ways', () => {
    let compared = 0;
    for (let seed = 1; seed <= 60; seed++) {
      const grid = randomGrid(seed);
      const wanted = sharesAnew(grid, 1e-3);
      const all = sharesOf(grid);
      for (const name of ['portFlow', 'portPressure', 'reachFlow'] as const) {
        compared += expectClose(all[name], wanted[name], 1e-4, `seed ${seed} ${name}`);
        compared += expectClose(
          sharesOf(grid, 200)[name],
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
      const grid = randomGrid(seed);
      const wanted = sharesAnew(grid, 1);
      const { portPressure, reachFlow } = sharesOf(grid);
      expectClose(portPressure, wanted.portPressure, 0.1, `seed ${seed} port pressure`);
      expectClose(reachFlow, wanted.reachFlow, 0.1, `seed ${seed} reach flow`);
    }
  });

  it('reads ± 0 % nowhere that matters on a chip driven by flow: its pressures and the shares of its lanes move', () => {
    const svg = drawing(
      { head: 'M5 10H40', one: 'M20 10V30', two: 'M40 10V30', foot: 'M20 30H55' },
      { feed: [5, 10], waste: [55, 30] },
    ).replace('data-name="two"', 'data-name="two" stroke-width="0.3"');
    const { network, run } = networkFrom(
      svg,
      'depth: 80 um\nports: { feed: { flow: 10 uL/min }, waste: open }\n',
    );
    const shares = sharesOf({ network, run });
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
