import { describe, expect, test } from 'vitest';
import { waterViscosity } from '../../src/physics/fluid.ts';
import type { PortCondition, TubingPiece } from '../../src/runsheet/types.ts';
import { drivesOf, type PortDrive } from '../../src/solve/drives.ts';
import {
  factorFlow,
  flowStateOf,
  kindsOf,
  loadOf,
  prepareFlow,
  solveFlow,
} from '../../src/solve/flow-state.ts';
import { solveGraph } from '../../src/solve/graph.ts';
import { gradientOfFlow } from '../../src/solve/sensitivity.ts';
import type { FlowState } from '../../src/solve/types.ts';
import { randomEdges, randomFrom } from './graphs.ts';
import { flowOf, networkOf, type PortSpec, type ReachSpec } from './network-of.ts';

/** 100 × 50 µm at 1 mPa s: exact series, Pa s/m³ per 10 mm (computed to many digits elsewhere). */
const R_PER_10_MM = 1.39932505319e13;

const at = (node: number, condition: PortCondition, tubing: readonly TubingPiece[] = []): PortSpec => ({
  node,
  condition,
  tubing,
});
const pressure = (pressurePa: number): PortCondition => ({ kind: 'pressure', pressurePa });
const flow = (flowM3s: number): PortCondition => ({ kind: 'flow', flowM3s });
const OPEN: PortCondition = { kind: 'open' };
const SEALED: PortCondition = { kind: 'sealed' };
const UNSET: PortCondition = { kind: 'unset' };

const line: readonly ReachSpec[] = [{ from: 0, to: 1, lengthMm: 10 }];
/** Inlets 0 and 1 meet in 2 and leave by 3; a stub goes from 2 to 4. */
const tee: readonly ReachSpec[] = [
  { from: 0, to: 2, lengthMm: 10 },
  { from: 1, to: 2, lengthMm: 20 },
  { from: 2, to: 3, lengthMm: 5, widthMm: 0.2, depthMm: 0.1 },
  { from: 2, to: 4, lengthMm: 7 },
];

const tube = (boreM: number, lengthM: number, temperatureK: number | null = null): TubingPiece => ({
  boreM,
  lengthM,
  temperatureK,
});
const tubeOf = (boreM: number, lengthM: number, viscosityPaS = 1e-3) =>
  (128 * viscosityPaS * lengthM) / (Math.PI * boreM ** 4);

describe('port conditions', () => {
  test('pressure against open: flow = Δp / R, into the chip where the pressure is', () => {
    const state = flowOf(networkOf(line, [at(0, pressure(1000)), at(1, OPEN)]));
    expect(state.reachResistance[0] / R_PER_10_MM).toBeCloseTo(1, 11);
    expect(state.reachFlow[0]).toBe(1000 / state.reachResistance[0]);
    expect([...state.portFlow]).toEqual([state.reachFlow[0], -state.reachFlow[0]]);
    expect([...state.nodePressure]).toEqual([1000, 0]);
    expect([...state.supplyPressure]).toEqual([1000, 0]);
    expect(state).toMatchObject({
      worstImbalance: 0,
      worstNode: -1,
      parts: [{ nodes: 2, ports: [0, 1], status: 'solved', flowSumM3s: 0 }],
    });
  });

  test('a head of either sign is ρ g h', () => {
    const state = flowOf(
      networkOf(line, [at(0, { kind: 'head', headM: -0.04 }), at(1, OPEN)], { densityKgM3: 997 }),
    );
    expect(state.portPressure[0]).toBeCloseTo(-997 * 9.80665 * 0.04, 10);
    expect(state.portFlow[0]).toBeLessThan(0);
  });

  test('a given flow enters, and its pressure is found', () => {
    const state = flowOf(
      networkOf(tee, [at(0, flow(2e-12)), at(1, flow(1e-12)), at(3, pressure(-50)), at(4, UNSET)]),
    );
    expect([...state.portFlow]).toEqual([2e-12, 1e-12, state.portFlow[2], 0]);
    expect(state.portFlow[2]).toBeCloseTo(-3e-12, 26);
    expect(state.reachFlow[3]).toBe(0);
    expect(state.portPressure[3]).toBe(state.nodePressure[2]);
    const drop = (r: number) => state.reachResistance[r] * state.reachFlow[r];
    expect(state.portPressure[0]).toBeCloseTo(-50 + drop(2) + drop(0), 10);
  });

  test('sealed and unset ports carry 0 and have the pressure of the chip there, with tubing or without', () => {
    for (const shut of [SEALED, UNSET]) {
      for (const tubing of [[], [tube(5e-4, 0.3)]]) {
        const state = flowOf(networkOf(tee, [at(0, pressure(1000)), at(1, shut, tubing), at(3, OPEN)]));
        expect(state.portFlow[1]).toBe(0);
        expect(state.reachFlow[1]).toBe(0);
        expect(state.portPressure[1]).toBe(state.nodePressure[2]);
        expect(state.supplyPressure[1]).toBe(state.nodePressure[2]);
      }
    }
  });

  test('all pressures equal: nothing flows, exactly', () => {
    const state = flowOf(
      networkOf(tee, [at(0, pressure(1e5 / 3)), at(1, pressure(1e5 / 3)), at(3, pressure(1e5 / 3))]),
    );
    expect(state.reachFlow).toEqual(new Float64Array(4));
    expect(state.portFlow).toEqual(new Float64Array(3));
    expect(new Set(state.nodePressure)).toEqual(new Set([1e5 / 3]));
  });
});

describe('tubing', () => {
  test('lies in series at the port, each piece at its own temperature', () => {
    const tubing = [tube(1e-4, 0.3, 288.15), tube(5e-5, 0.08)];
    const state = flowOf(
      networkOf(line, [at(0, pressure(2e4), tubing), at(1, OPEN)], { mixture: { kind: 'water' } }),
    );
    // a piece with no temperature of its own has the chip's fluid, 1 mPa s here whatever water has
    const R = tubeOf(1e-4, 0.3, waterViscosity(288.15)) + tubeOf(5e-5, 0.08);
    expect(state.tubingResistance[0] / R).toBeCloseTo(1, 14);
    expect(state.tubingResistance[1]).toBe(0);
    expect((state.portFlow[0] * (R + state.reachResistance[0])) / 2e4).toBeCloseTo(1, 13);
    expect(state.supplyPressure[0]).toBe(2e4);
    expect(state.portPressure[0] / (state.portFlow[0] * state.reachResistance[0])).toBeCloseTo(1, 13);
    expect(state.worstNode).toBe(0);
  });

  test('on a syringe pump raises the supply pressure by R·Q and changes nothing in the chip', () => {
    const ports = (tubing: readonly TubingPiece[]) => [at(0, flow(1e-10), tubing), at(1, OPEN)];
    const bare = flowOf(networkOf(line, ports([])));
    const tubed = flowOf(networkOf(line, ports([tube(1e-4, 0.1)])));
    expect(tubed.reachFlow).toEqual(bare.reachFlow);
    expect(tubed.portPressure[0]).toBeCloseTo(bare.portPressure[0], 9);
    expect(tubed.supplyPressure[0] - tubed.portPressure[0]).toBeCloseTo(tubeOf(1e-4, 0.1) * 1e-10, 9);
  });

  test('of no length is no tubing', () => {
    const state = flowOf(networkOf(line, [at(0, pressure(1000), [tube(1e-4, 0)]), at(1, OPEN)]));
    expect([...state.supplyPressure]).toEqual([...state.portPressure]);
  });
});

describe('parts', () => {
  test('flows alone that add up give flows but no pressures', () => {
    const third = 1e-10 / 3;
    const state = flowOf(
      networkOf(tee, [at(0, flow(third)), at(1, flow(2 * third)), at(3, flow(-1e-10)), at(4, SEALED)]),
    );
    expect(state.parts[0]).toMatchObject({ status: 'no-reference' });
    expect(state.reachFlow[0] / third).toBeCloseTo(1, 14);
    expect(state.reachFlow[2] / 1e-10).toBeCloseTo(1, 14);
    expect(state.reachPressureDrop[2]).toBe(state.reachResistance[2] * state.reachFlow[2]);
    for (const p of [...state.nodePressure, ...state.portPressure, ...state.supplyPressure])
      expect(p).toBeNaN();
    expect(state.portFlow[1]).toBe(2 * third);
    expect(state.worstImbalance).toBeLessThan(1e-12);
  });

  test('flows alone that miss by rounding of the run sheet are balanced at the largest of them', () => {
    const state = flowOf(
      networkOf(tee, [at(0, flow(1e-15)), at(1, flow(1e-10)), at(3, flow(-1e-10 - 1e-15 - 5e-20))]),
    );
    expect(state.parts[0].status).toBe('no-reference');
    expect(state.portFlow[0] / 1e-15).toBeCloseTo(1, 9);
    expect(state.portFlow[1]).toBe(1e-10);
    expect(state.portFlow[2]).toBeCloseTo(-1e-10 - 1e-15, 26);
    expect(state.worstImbalance).toBeLessThan(1e-12);
  });

  test('flows alone add up where they miss by less than a billionth of the largest, and not beyond', () => {
    const missing = (share: number): string =>
      flowOf(networkOf(tee, [at(0, flow(1e-10)), at(3, flow(-1e-10 * (1 - share)))])).parts[0].status;
    expect(missing(0.9e-9)).toBe('no-reference');
    expect(missing(1.1e-9)).toBe('flows-do-not-add-up');
  });

  test('flows alone that do not add up give nothing but their sum', () => {
    const state = flowOf(networkOf(tee, [at(0, flow(1e-10)), at(3, flow(-0.9e-10))]));
    expect(state.parts[0].status).toBe('flows-do-not-add-up');
    expect(state.parts[0].flowSumM3s).toBeCloseTo(1e-11, 25);
    nothingKnown(state);
  });

  test('a part where nothing is set is no-drive, beside one that is solved', () => {
    const reaches = [...line, { from: 2, to: 3, lengthMm: 1 }];
    const state = flowOf(networkOf(reaches, [at(0, pressure(10)), at(1, OPEN), at(2, UNSET), at(3, SEALED)]));
    expect(state.parts.map(({ status }) => status)).toEqual(['solved', 'no-drive']);
    expect([...state.nodePart]).toEqual([0, 0, 1, 1]);
    expect(state.reachFlow[0]).toBeGreaterThan(0);
    expect(state.reachFlow[1]).toBeNaN();
    expect(state.portFlow[2]).toBeNaN();
    expect(state.worstNode).toBe(-1);
  });

  test('a missing depth makes its part unsized and leaves the others', () => {
    const reaches = [
      ...tee,
      { from: 2, to: 5, lengthMm: 1, depthMm: Number.NaN },
      { from: 6, to: 7, lengthMm: 10 },
    ];
    const state = flowOf(
      networkOf(reaches, [at(0, pressure(10)), at(3, OPEN), at(6, pressure(1)), at(7, OPEN)]),
    );
    expect(state.parts.map(({ status }) => status)).toEqual(['unsized', 'solved']);
    expect(state.reachResistance[4]).toBeNaN();
    expect(state.reachFlow[0]).toBeNaN();
    expect(state.reachFlow[5]).toBeGreaterThan(0);
  });

  test('two ports that hold one node at different pressures conflict; at one pressure nothing tells their shares', () => {
    const conflict = flowOf(networkOf(line, [at(0, pressure(10)), at(0, OPEN), at(1, OPEN)]));
    expect(conflict.parts[0].status).toBe('conflict');
    nothingKnown(conflict);
    const shared = flowOf(networkOf(line, [at(0, pressure(10)), at(0, pressure(10)), at(1, OPEN)]));
    expect(shared.parts[0].status).toBe('solved');
    expect([shared.portFlow[0], shared.portFlow[1]]).toEqual([Number.NaN, Number.NaN]);
    expect(shared.portFlow[2]).toBe(-shared.reachFlow[0]);
  });

  test('ports of one node may hold its pressure and give it a flow', () => {
    const state = flowOf(networkOf(line, [at(0, flow(3e-12)), at(0, pressure(100)), at(1, OPEN)]));
    expect(state.portFlow[0]).toBe(3e-12);
    expect(state.portFlow[1]).toBeCloseTo(state.reachFlow[0] - 3e-12, 26);
  });

  test('ports without any channel are parts of their own', () => {
    const state = flowOf(
      networkOf([], [at(0, pressure(5)), at(1, flow(1e-12)), at(2, SEALED), at(3, flow(0))]),
    );
    expect(state.parts.map(({ status }) => status)).toEqual([
      'solved',
      'flows-do-not-add-up',
      'no-drive',
      'no-reference',
    ]);
    expect([...state.portFlow]).toEqual([0, Number.NaN, Number.NaN, 0]);
    expect(state.portPressure[0]).toBe(5);
  });

  test('a network of nothing has nothing', () => {
    expect(flowOf(networkOf([], []))).toMatchObject({ parts: [], worstImbalance: 0, worstNode: -1 });
  });
});

describe('random networks', () => {
  function randomNetwork(seed: number) {
    const random = randomFrom(seed);
    const nodes = 8 + Math.floor(random() * 40);
    const reaches = randomEdges(nodes, Math.floor(random() * nodes), random).map(([from, to]) => ({
      from,
      to,
      lengthMm: 10 ** (3 * random() - 1),
      widthMm: 10 ** (2 * random() - 2),
      depthMm: 10 ** (1.5 * random() - 2),
    }));
    const ports = Array.from({ length: 2 + Math.floor(random() * 5) }, (_, k) => {
      const kind = k === 0 ? 0 : random();
      const condition =
        kind < 0.5 ? pressure(1e5 * random()) : kind < 0.8 ? flow(1e-10 * (random() - 0.5)) : SEALED;
      return at(k % nodes, condition, random() < 0.4 ? [tube(1e-4 * (1 + random()), random())] : []);
    });
    return networkOf(reaches, ports);
  }

  test('balance below 1e-12, keep Δp = R·Q on every reach, and give in what they take out', () => {
    for (let seed = 1; seed <= 120; seed++) {
      const { network, run } = randomNetwork(seed);
      const state = solveFlow(network, run);
      expect(state.parts[0].status).toBe('solved');
      expect(state.worstImbalance, `seed ${seed}`).toBeLessThan(1e-12);
      const largest = Math.max(...state.portFlow.map(Math.abs));
      expect(Math.abs(state.portFlow.reduce((sum, q) => sum + q, 0))).toBeLessThanOrEqual(1e-14 * largest);
      for (let r = 0; r < network.reachCount; r++) {
        const [a, b] = [state.nodePressure[network.reachFrom[r]], state.nodePressure[network.reachTo[r]]];
        expect(Math.abs(a - b - state.reachPressureDrop[r])).toBeLessThanOrEqual(
          3e-16 * (Math.abs(a) + Math.abs(b)),
        );
        expect(state.reachPressureDrop[r]).toBe(state.reachResistance[r] * state.reachFlow[r]);
      }
    }
  });

  test('answer a flow-driven port and the pressure found for it alike', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const { network, run } = randomNetwork(seed);
      const drives = drivesOf(run);
      const prepared = prepareFlow(network, run);
      const state = flowStateOf(factorFlow(prepared, kindsOf(drives)), drives);
      const swapped = drives.map(
        (drive, port): PortDrive =>
          drive.kind === 'flow' ? { kind: 'pressure', pressurePa: state.supplyPressure[port] } : drive,
      );
      const again = flowStateOf(factorFlow(prepared, kindsOf(swapped)), swapped);
      const largest = Math.max(...state.portFlow.map(Math.abs));
      again.portFlow.forEach((q, port) => {
        // The pressure was rounded to a double; the ports between them have at most 1e12 of conductance ratio.
        expect(Math.abs(q - state.portFlow[port])).toBeLessThanOrEqual(1e-9 * largest);
      });
    }
  });
});

describe('phases', () => {
  const { network, run } = networkOf(tee, [
    at(0, pressure(1000), [tube(2e-4, 0.1)]),
    at(1, flow(1e-12)),
    at(3, OPEN),
  ]);
  const drives = drivesOf(run);

  test('analyse once for each set of fixed and injected ports', () => {
    const prepared = prepareFlow(network, run);
    const first = factorFlow(prepared, kindsOf(drives));
    const doubled = {
      reach: prepared.nominal.reach.map((R) => 2 * R),
      tubing: prepared.nominal.tubing.map((R) => 2 * R),
    };
    const second = factorFlow(prepared, kindsOf(drives), doubled, first);
    expect(second.graphFactor.analysis).toBe(first.graphFactor.analysis);
    expect(prepared.analyses.size).toBe(1);
    const halved = drives.map(
      (drive): PortDrive => (drive.kind === 'flow' ? { kind: 'flow', flowM3s: drive.flowM3s / 2 } : drive),
    );
    const state = solveFlow(network, run);
    const slower = flowStateOf(second, halved);
    slower.reachFlow.forEach((q, r) => {
      expect(q).toBeCloseTo(state.reachFlow[r] / 2, 26);
    });
    factorFlow(prepared, ['flow', 'flow', 'pressure']);
    expect(prepared.analyses.size).toBe(2);
  });

  test('refuse drives of another kind than was factored', () => {
    const factor = factorFlow(prepareFlow(network, run), kindsOf(drives));
    expect(() => flowStateOf(factor, [drives[0], { kind: 'none' }, drives[2]])).toThrow(
      'port 1 is driven by none, but flow was factored',
    );
  });

  test('give sensitivities that agree with solving again', () => {
    const prepared = prepareFlow(network, run);
    const factor = factorFlow(prepared, kindsOf(drives));
    const load = loadOf(factor, drives);
    const gradient = gradientOfFlow(factor.graphFactor, solveGraph(factor.graphFactor, load), 2);
    const changed = (share: number) =>
      flowStateOf(
        factorFlow(prepared, kindsOf(drives), {
          reach: prepared.nominal.reach.map((R, r) => (r === 0 ? R * (1 + share) : R)),
          tubing: prepared.nominal.tubing,
        }),
        drives,
      ).reachFlow[2];
    const found = (changed(1e-4) - changed(-1e-4)) / (2e-4 * prepared.nominal.reach[0]);
    expect(gradient.resistance[0] / found).toBeCloseTo(1, 6);
  });
});

function nothingKnown(state: FlowState): void {
  for (const column of [
    state.nodePressure,
    state.reachFlow,
    state.reachPressureDrop,
    state.portFlow,
    state.portPressure,
    state.supplyPressure,
  ]) {
    for (const value of column) expect(value).toBeNaN();
  }
}
