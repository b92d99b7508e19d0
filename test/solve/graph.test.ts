import fc from 'fast-check';
import { all, create, type Matrix } from 'mathjs';
import { describe, expect, test } from 'vitest';
import { balanceOf } from '../../src/solve/balance.ts';
import type { FlowGraph } from '../../src/solve/flow-graph.ts';
import { analyseGraph, factorGraph, type GraphFlow, solveGraph } from '../../src/solve/graph.ts';
import {
  type Gradient,
  gradientOfFlow,
  gradientOfInflow,
  gradientOfPressure,
} from '../../src/solve/sensitivity.ts';
import { graphOf, gridEdges, randomEdges, randomFrom, shuffled } from './graphs.ts';
import { exactly, type Fraction, minus, relativeError, solveExactly, toNumber } from './rational.ts';

interface Problem {
  readonly graph: FlowGraph;
  readonly resistance: Float64Array;
  readonly fixed: ReadonlyMap<number, number>;
  readonly injected: ReadonlyMap<number, number>;
}

function problem(
  nodeCount: number,
  edges: readonly (readonly [number, number])[],
  resistance: readonly number[] | Float64Array,
  fixed: Readonly<Record<number, number>>,
  injected: Readonly<Record<number, number>> = {},
): Problem {
  const mapOf = (record: Readonly<Record<number, number>>) =>
    new Map(Object.entries(record).map(([node, value]) => [Number(node), value]));
  return {
    graph: graphOf(nodeCount, edges),
    resistance: Float64Array.from(resistance),
    fixed: mapOf(fixed),
    injected: mapOf(injected),
  };
}

function factored({ graph, resistance, fixed, injected }: Problem) {
  return factorGraph(
    analyseGraph(graph, Int32Array.from(fixed.keys()), Int32Array.from(injected.keys())),
    resistance,
  );
}

function loadOf({ graph, fixed, injected }: Problem) {
  const fixedPressure = new Float64Array(graph.nodeCount);
  const injection = new Float64Array(graph.nodeCount);
  for (const [node, value] of fixed) fixedPressure[node] = value;
  for (const [node, value] of injected) injection[node] = value;
  return { fixedPressure, injection };
}

function solved(p: Problem): GraphFlow {
  return solveGraph(factored(p), loadOf(p));
}

function exact({ graph, resistance, fixed, injected }: Problem) {
  const edges = Array.from(graph.from, (from, e) => ({
    from,
    to: graph.to[e],
    resistance: exactly(resistance[e]),
  }));
  const fractions = (map: ReadonlyMap<number, number>) =>
    new Map([...map].map(([node, value]) => [node, exactly(value)]));
  return solveExactly(graph.nodeCount, edges, fractions(fixed), fractions(injected));
}

function imbalance({ graph, fixed }: Problem, { flow, inflow }: GraphFlow): number {
  const inner = new Uint8Array(graph.nodeCount).fill(1);
  for (const node of fixed.keys()) inner[node] = 0;
  return balanceOf(graph, flow, inflow, inner).worstImbalance;
}

/** A random network with two to four fixed nodes, some injections, stubs, loops and parallel edges; resistances over `decades` powers of ten. */
function randomProblem(
  seed: number,
  nodeCount: number,
  extra: number,
  decades: number,
  injections: number,
): Problem {
  const random = randomFrom(seed);
  const edges = randomEdges(nodeCount, extra, random);
  const resistance = edges.map(() => 10 ** (decades * random()));
  const nodes = [...shuffled(nodeCount, random)];
  const fixed: Record<number, number> = {};
  const injected: Record<number, number> = {};
  const fixedCount = Math.min(nodeCount, 2 + Math.floor(3 * random()));
  nodes.slice(0, fixedCount).forEach((node) => {
    fixed[node] = Math.round(2e5 * random() - 1e5);
  });
  nodes.slice(fixedCount, fixedCount + injections).forEach((node) => {
    injected[node] = (random() - 0.5) * 100;
  });
  return problem(nodeCount, edges, resistance, fixed, injected);
}

describe('solveGraph against exact fractions', () => {
  test('gives every flow to the last digits on random networks with conductances 1e12 apart', () => {
    for (let seed = 1; seed <= 60; seed++) {
      const p = randomProblem(seed, 10, 8, 12, seed % 3);
      const flow = solved(p);
      const truth = exact(p);
      const largest = Math.max(...truth.flow.map((q) => Math.abs(toNumber(q))));
      for (let e = 0; e < p.resistance.length; e++) {
        if (p.graph.from[e] === p.graph.to[e]) {
          expect(flow.flow[e]).toBe(0);
          continue;
        }
        const size = Math.abs(toNumber(truth.flow[e]));
        // A difference of flows from outside is as good as those; a flow of its own is good to its own last digits.
        if (size > 1e-14 * largest)
          expect(relativeError(flow.flow[e], truth.flow[e]), `seed ${seed} edge ${e}`).toBeLessThan(1e-14);
        else expect(Math.abs(flow.flow[e] - toNumber(truth.flow[e]))).toBeLessThan(1e-28 * largest);
      }
      expect(imbalance(p, flow), `seed ${seed}`).toBeLessThan(1e-12);
      expect(flow.refinements).toBeLessThanOrEqual(4);
    }
  });

  test('holds pressures to 28 digits, so that their differences over a wide channel keep their own', () => {
    const p = problem(
      4,
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [1, 2],
        [1, 3],
      ],
      [1e12, 1, 1e12, 3, 7e11],
      { 0: 1e5, 3: 0 },
    );
    const flow = solved(p);
    const truth = exact(p);
    for (let i = 0; i < 4; i++) {
      const error = minus(minus(truth.pressure[i], exactly(flow.pressureHi[i])), exactly(flow.pressureLo[i]));
      expect(Math.abs(toNumber(error))).toBeLessThan(1e-28 * 1e5);
    }
  });

  test('keeps small flows of a ladder that fade to 1e-20 of the inflow', () => {
    const rungs = 14;
    const edges: [number, number][] = [];
    const resistance: number[] = [];
    for (let k = 0; k < rungs; k++) {
      edges.push([2 * k, 2 * k + 1]);
      resistance.push(1);
      if (k + 1 === rungs) break;
      edges.push([2 * k, 2 * k + 2], [2 * k + 1, 2 * k + 3]);
      resistance.push(25, 25);
    }
    const p = problem(2 * rungs, edges, resistance, { 0: 1, 1: 0 });
    const flow = solved(p);
    const truth = exact(p);
    expect(Math.abs(toNumber(truth.flow[truth.flow.length - 1]))).toBeLessThan(1e-20);
    truth.flow.forEach((q, e) => {
      expect(relativeError(flow.flow[e], q)).toBeLessThan(1e-14);
    });
  });

  test('knows that a balanced bridge carries exactly nothing, in any numbering', () => {
    const random = randomFrom(8);
    for (let k = 0; k < 40; k++) {
      const r = [1, 1 / 3, 1e7, 0.1][k % 4] * (1 + random());
      const scale = 2 ** Math.floor(20 * random());
      const at = shuffled(6, random);
      const edges = (
        [
          [0, 1],
          [1, 2],
          [1, 3],
          [2, 4],
          [3, 4],
          [2, 3],
          [4, 5],
        ] as const
      ).map(([a, b]) => [at[a], at[b]] as const);
      const p = problem(6, edges, [3.3, r, r * scale, 5 * r, 5 * r * scale, 10 ** (12 * random() - 6), 0.7], {
        [at[0]]: 12345.678,
        [at[5]]: -77,
      });
      const flow = solved(p);
      // 5·r rounds the same way on both sides and the scale is a power of two, so the bridge is balanced exactly.
      expect(flow.flow[5]).toBe(0);
      expect(flow.flow[0]).not.toBe(0);
    }
  });
});

describe('solveGraph on what carries nothing', () => {
  test('gives exactly 0 to stubs, trees and loops that hang on one node, and the pressure of that node', () => {
    // 0 –1– 2 is live; 3, 4 a tree on 1; 5, 6, 7 a loop on 4; 8 a stub on the fixed node 2.
    const edges = [
      [0, 1],
      [1, 2],
      [1, 3],
      [1, 4],
      [4, 5],
      [5, 6],
      [6, 4],
      [6, 7],
      [7, 5],
      [2, 8],
    ] as const;
    const flow = solved(problem(9, edges, [0.1, 0.3, 1, 1, 0.7, 1e-9, 1e9, 0.2, 3, 1], { 0: 7, 2: 1 }));
    expect(flow.flow.subarray(2)).toEqual(new Float64Array(8));
    for (const i of [3, 4, 5, 6, 7]) expect(flow.pressureHi[i]).toBe(flow.pressureHi[1]);
    expect(flow.pressureHi[8]).toBe(1);
    expect(flow.flow[0]).toBeCloseTo(15, 13);
  });

  test('gives exactly 0 everywhere when all fixed pressures are equal, or only one is fixed', () => {
    const edges = gridEdges(5, 5);
    const resistance = edges.map((_, e) => 1 + (e % 7) / 3);
    for (const fixed of [{ 0: 1e5 / 3, 24: 1e5 / 3, 12: 1e5 / 3 }, { 7: -0.1 }]) {
      const flow = solved(problem(25, edges, resistance, fixed));
      expect(flow.flow).toEqual(new Float64Array(edges.length));
      expect(new Set(flow.pressureHi)).toEqual(new Set(Object.values(fixed)));
    }
  });

  test('says NaN, not a guess, where no fixed pressure reaches, and never reads a resistance there', () => {
    const flow = solved(
      problem(
        5,
        [
          [0, 1],
          [2, 3],
          [4, 4],
        ],
        [2, Number.NaN, 1],
        { 0: 1, 1: 0 },
        { 2: 1 },
      ),
    );
    expect([...flow.flow]).toEqual([0.5, Number.NaN, Number.NaN]);
    expect([...flow.pressureHi]).toEqual([1, 0, Number.NaN, Number.NaN, Number.NaN]);
    expect(flow.inflow[2]).toBeNaN();
  });

  test('refuses a resistance that is not above 0, with the edge', () => {
    for (const R of [0, -1, Infinity, Number.NaN]) {
      expect(() =>
        solved(
          problem(
            3,
            [
              [0, 1],
              [1, 2],
            ],
            [1, R],
            { 0: 1, 2: 0 },
          ),
        ),
      ).toThrow(`edge 1 has resistance ${R}; it must be a finite number above 0`);
    }
  });
});

describe('solveGraph by the laws of linear networks', () => {
  test('gives one flow, to the last bit, along a chain', () => {
    const flow = solved(
      problem(
        6,
        [
          [0, 1],
          [2, 1],
          [2, 3],
          [3, 4],
          [5, 4],
        ],
        [1e-9, 3, 1 / 3, 1e9, 0.1],
        { 0: 9, 5: 2 },
      ),
    );
    const [q] = flow.flow;
    expect([...flow.flow]).toEqual([q, -q, q, q, -q]);
    expect(flow.pressureHi[1]).toBeLessThanOrEqual(9);
    expect(flow.pressureHi[4]).toBeGreaterThanOrEqual(2);
  });

  test('agrees with the sparse LU of mathjs on random networks', () => {
    const math = create(all);
    fc.assert(
      fc.property(fc.integer(), fc.integer({ min: 4, max: 60 }), (seed, n) => {
        const p = randomProblem(seed, n, n, 2, 2);
        const flow = solved(p);
        const A = math.matrix(math.zeros([n, n]), 'sparse') as Matrix; // with an array of sizes zeros gives an array, which matrix() makes a Matrix
        const b = new Array<number>(n).fill(0);
        const grow = (i: number, j: number, value: number) => A.set([i, j], Number(A.get([i, j])) + value);
        p.graph.from.forEach((from, e) => {
          const to = p.graph.to[e];
          const g = 1 / p.resistance[e];
          for (const [i, j] of [
            [from, to],
            [to, from],
          ]) {
            if (p.fixed.has(i)) continue;
            grow(i, i, g);
            grow(i, j, -g);
          }
        });
        for (const [node, q] of p.injected) b[node] = q;
        for (const [node, value] of p.fixed) {
          A.set([node, node], 1);
          b[node] = value;
        }
        const x = (math.lusolve(A, b) as Matrix).toArray().flat() as number[]; // a Matrix for a Matrix, n × 1
        x.forEach((value, i) => {
          expect(Math.abs(flow.pressureHi[i] - value)).toBeLessThan(1e-9 * 1e5);
        });
      }),
      { seed: 21, numRuns: 25 },
    );
  });

  test('is reciprocal: node i feels a flow into j as j feels it into i', () => {
    const edges = gridEdges(6, 7);
    const random = randomFrom(3);
    const resistance = edges.map(() => 10 ** (6 * random()));
    const nodes = Int32Array.from([1, 9, 17, 33, 40]);
    const factor = factorGraph(
      analyseGraph(graphOf(42, edges), Int32Array.from([0, 41]), nodes),
      Float64Array.from(resistance),
    );
    const responses = [...nodes].map((node) => {
      const injection = new Float64Array(42);
      injection[node] = 1;
      return solveGraph(factor, { fixedPressure: new Float64Array(42), injection }).pressureHi;
    });
    nodes.forEach((a, i) => {
      nodes.forEach((b, j) => {
        expect(Math.abs(responses[i][b] / responses[j][a] - 1)).toBeLessThan(1e-15);
      });
    });
  });

  test('keeps every pressure within the fixed ones, and Δp = R·Q on every edge', () => {
    for (let seed = 100; seed < 130; seed++) {
      const p = randomProblem(seed, 80, 60, 12, 0);
      const { pressureHi, pressureLo, flow } = solved(p);
      const given = [...p.fixed.values()];
      expect(Math.max(...pressureHi)).toBeLessThanOrEqual(Math.max(...given));
      expect(Math.min(...pressureHi)).toBeGreaterThanOrEqual(Math.min(...given));
      flow.forEach((q, e) => {
        const [a, b] = [p.graph.from[e], p.graph.to[e]];
        const drop = pressureHi[a] - pressureHi[b] + (pressureLo[a] - pressureLo[b]);
        // The difference itself is only known to the 106 bits of its ends.
        const slack = 1e-15 * Math.abs(drop) + 1e-30 * (Math.abs(pressureHi[a]) + Math.abs(pressureHi[b]));
        expect(Math.abs(drop - p.resistance[e] * q)).toBeLessThanOrEqual(slack);
      });
    }
  });

  test('does not care how nodes and edges are numbered or which way edges point', () => {
    for (let seed = 200; seed < 220; seed++) {
      const p = randomProblem(seed, 50, 40, 8, 2);
      const random = randomFrom(seed);
      const node = shuffled(50, random);
      const edge = shuffled(p.resistance.length, random);
      const turned = edge.map(() => (random() < 0.5 ? 1 : 0));
      const moved = (map: ReadonlyMap<number, number>) =>
        new Map([...map].reverse().map(([i, v]) => [node[i], v]));
      const q: Problem = {
        graph: {
          nodeCount: 50,
          from: edge.map((e, k) => node[turned[k] ? p.graph.to[e] : p.graph.from[e]]),
          to: edge.map((e, k) => node[turned[k] ? p.graph.from[e] : p.graph.to[e]]),
        },
        resistance: Float64Array.from(edge, (e) => p.resistance[e]),
        fixed: moved(p.fixed),
        injected: moved(p.injected),
      };
      const one = solved(p);
      const other = solved(q);
      const largest = Math.max(...one.flow.map(Math.abs));
      edge.forEach((e, k) => {
        const there = turned[k] ? -other.flow[k] : other.flow[k];
        expect(Math.abs(there - one.flow[e])).toBeLessThanOrEqual(
          1e-14 * Math.abs(one.flow[e]) + 1e-28 * largest,
        );
      });
    }
  });

  test('is linear in its load, so that one factor answers for all settings', () => {
    const p = randomProblem(31, 60, 60, 6, 3);
    const factor = factored(p);
    const load = loadOf(p);
    const whole = solveGraph(factor, load);
    const sum = new Float64Array(p.resistance.length);
    const nought = new Float64Array(60);
    for (const node of [...p.fixed.keys(), ...p.injected.keys()]) {
      const one = (values: Float64Array) => nought.map((_, i) => (i === node ? values[i] : 0));
      solveGraph(factor, {
        fixedPressure: one(load.fixedPressure),
        injection: one(load.injection),
      }).flow.forEach((q, e) => {
        sum[e] += q;
      });
    }
    const largest = Math.max(...whole.flow.map(Math.abs));
    sum.forEach((q, e) => {
      expect(Math.abs(q - whole.flow[e])).toBeLessThan(1e-14 * largest);
    });
  });

  test('balances a 60 × 60 lattice with conductances 1e12 apart below 1e-12', () => {
    const edges = gridEdges(60, 60);
    const random = randomFrom(9);
    const p = problem(
      3600,
      edges,
      edges.map(() => 10 ** (12 * random())),
      { 0: 1e5, 3599: 0 },
    );
    const flow = solved(p);
    expect(imbalance(p, flow)).toBeLessThan(1e-12);
    expect(Math.abs(flow.inflow[0] / flow.inflow[3599] + 1)).toBeLessThan(1e-14);
  });

  test('factors new resistances with the same analysis to the same bits as from scratch', () => {
    const p = randomProblem(41, 60, 60, 3, 1);
    const first = factored(p);
    const changed = p.resistance.map((R) => 1.7 * R);
    const reused = factorGraph(first.analysis, changed, first);
    expect(solveGraph(reused, loadOf(p))).toEqual(solved({ ...p, resistance: changed }));
  });
});

describe('gradients', () => {
  const random = randomProblem(51, 12, 10, 2, 3);
  // Few bits, so that the fractions stay short.
  const p = { ...random, resistance: random.resistance.map((R) => Math.ceil(R * 16) / 16) };
  const factor = factored(p);
  const flow = solveGraph(factor, loadOf(p));

  type Result = (truth: ReturnType<typeof exact>) => Fraction;
  const results: readonly { readonly name: string; readonly gradient: Gradient; readonly result: Result }[] =
    [
      ...[0, 3, 7, 12, 19].map((edge) => ({
        name: `the flow of edge ${edge}`,
        gradient: gradientOfFlow(factor, flow, edge),
        result: (truth: ReturnType<typeof exact>) => truth.flow[edge],
      })),
      ...[...p.injected.keys()].map((node) => ({
        name: `the pressure of node ${node}`,
        gradient: gradientOfPressure(factor, flow, node),
        result: (truth: ReturnType<typeof exact>) => truth.pressure[node],
      })),
    ];

  /** Central differences of all results, in fractions: free of rounding, so of second order in the step alone. */
  function differences(change: (step: number) => Problem, step: number): number[] {
    const above = exact(change(step));
    const below = exact(change(-step));
    return results.map(({ result }) => toNumber(minus(result(above), result(below))) / (2 * step));
  }

  test('by the adjoint network equal exact central differences', () => {
    const near = (found: number, given: number, scale: number) =>
      expect(Math.abs(found - given)).toBeLessThan(1e-6 * Math.abs(found) + 1e-13 * scale);
    p.resistance.forEach((R, e) => {
      if (p.graph.from[e] === p.graph.to[e]) return;
      const changed = (step: number): Problem => ({
        ...p,
        resistance: p.resistance.map((r, k) => (k === e ? R + step : r)),
      });
      const found = differences(changed, 2 ** Math.round(Math.log2(R) - 14));
      results.forEach(({ gradient }, k) => {
        near(found[k], gradient.resistance[e], Math.max(...gradient.resistance.map(Math.abs)));
      });
    });
    const moved = (map: ReadonlyMap<number, number>, node: number, step: number) =>
      new Map([...map].map(([i, v]) => [i, i === node ? v + step : v] as const));
    for (const node of p.fixed.keys()) {
      const found = differences((step) => ({ ...p, fixed: moved(p.fixed, node, step) }), 1);
      results.forEach(({ gradient }, k) => {
        near(found[k], gradient.pressure[node], 1);
      });
    }
    for (const node of p.injected.keys()) {
      const found = differences((step) => ({ ...p, injected: moved(p.injected, node, step) }), 1);
      results.forEach(({ gradient }, k) => {
        near(found[k], gradient.injection[node], 1);
      });
    }
  });

  test('of an inflow equal the sum of those of the edges at that node', () => {
    const [node] = p.fixed.keys();
    const whole = gradientOfInflow(factor, flow, node);
    const sum = new Float64Array(p.resistance.length);
    p.graph.from.forEach((from, e) => {
      const to = p.graph.to[e];
      if (from === to || (from !== node && to !== node)) return;
      const sign = from === node ? 1 : -1;
      gradientOfFlow(factor, flow, e).resistance.forEach((d, k) => {
        sum[k] += sign * d;
      });
    });
    const scale = Math.max(...sum.map(Math.abs));
    sum.forEach((d, k) => {
      expect(Math.abs(d - whole.resistance[k])).toBeLessThan(1e-13 * scale);
    });
  });

  test('refuse a node that the analysis does not know as fixed or injected', () => {
    const other = [...new Array(12).keys()].find((i) => !p.fixed.has(i) && !p.injected.has(i)) ?? -1;
    expect(() => gradientOfPressure(factor, flow, other)).toThrow('is not among the injected nodes');
    expect(() => gradientOfInflow(factor, flow, other)).toThrow('is not fixed');
  });
});
