import { describe, expect, test } from 'vitest';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { analyseGraph, factorGraph, solveGraph } from '../../src/solve/graph.ts';
import { graphOf, gridEdges } from '../solve/graphs.ts';
import { networkOf } from '../solve/network-of.ts';
import { type Fraction, fraction, relativeError } from '../solve/rational.ts';

/** Unit flow from a to b: resistance between them, and the flow of each edge. */
function between(
  a: number,
  b: number,
  nodeCount: number,
  edges: readonly (readonly [number, number])[],
  resistance: readonly number[] = edges.map(() => 1),
) {
  const fixed = Int32Array.from([b]);
  const injected = Int32Array.from([a]);
  const factor = factorGraph(
    analyseGraph(graphOf(nodeCount, edges), fixed, injected),
    Float64Array.from(resistance),
  );
  const injection = new Float64Array(nodeCount);
  injection[a] = 1;
  const { pressureHi, flow } = solveGraph(factor, { fixedPressure: new Float64Array(nodeCount), injection });
  return { R: pressureHi[a], flow };
}

/** Half an ulp of rounding and one more. */
const LAST_DIGIT = 2.5e-16;

describe('networks with exact answers', () => {
  // On-Line Encyclopedia of Integer Sequences, A357113 / A357114: n × n squares of unit resistors, opposite corners. Published, seen.
  test.each([
    [1, fraction(1)],
    [2, fraction(3, 2)],
    [3, fraction(13, 7)],
    [4, fraction(47, 22)],
  ] as const)(
    'a lattice of %i × %i squares of unit resistors has its published corner-to-corner resistance',
    (n: number, exact: Fraction) => {
      const side = n + 1;
      expect(
        relativeError(between(0, side * side - 1, side * side, gridEdges(side, side)).R, exact),
      ).toBeLessThan(LAST_DIGIT);
    },
  );

  // Ladder of n squares of unit resistors, opposite corners: 1, 7/5, 15/8, 45/19, 43/15. Published, seen; recomputed in exact fractions.
  test.each([
    [1, fraction(1)],
    [2, fraction(7, 5)],
    [3, fraction(15, 8)],
    [4, fraction(45, 19)],
    [5, fraction(43, 15)],
  ] as const)(
    'a ladder of %i squares of unit resistors has its published corner-to-corner resistance',
    (n: number, exact: Fraction) => {
      expect(relativeError(between(0, 2 * n + 1, 2 * n + 2, gridEdges(2, n + 1)).R, exact)).toBeLessThan(
        LAST_DIGIT,
      );
    },
  );

  // Wheatstone bridge 1, 2, 3, 4 with bridge 5 (edges 0-1, 0-2, 1-3, 2-3, 1-2): computed in exact fractions.
  test('a Wheatstone bridge of 1, 2, 3, 4 and 5 has 170/71, and 2/71 of the flow in its bridge', () => {
    const { R, flow } = between(
      0,
      3,
      4,
      [
        [0, 1],
        [0, 2],
        [1, 3],
        [2, 3],
        [1, 2],
      ],
      [1, 2, 3, 4, 5],
    );
    expect(relativeError(R, fraction(170, 71))).toBeLessThan(LAST_DIGIT);
    expect(relativeError(flow[4], fraction(2, 71))).toBeLessThan(LAST_DIGIT);
  });

  test('the same bridge balanced, 1, 2, 2, 4, carries exactly nothing', () => {
    expect(
      between(
        0,
        3,
        4,
        [
          [0, 1],
          [0, 2],
          [1, 3],
          [2, 3],
          [1, 2],
        ],
        [1, 2, 2, 4, 5],
      ).flow[4],
    ).toBe(0);
  });

  // Cube of unit resistors: edge 7/12, face diagonal 3/4, space diagonal 5/6 (textbook).
  test.each([
    ['edge', 1, fraction(7, 12)],
    ['face diagonal', 3, fraction(3, 4)],
    ['space diagonal', 7, fraction(5, 6)],
  ] as const)(
    'a cube of unit resistors has its textbook resistance across the %s',
    (_name: string, corner: number, exact: Fraction) => {
      const edges: [number, number][] = [];
      for (let i = 0; i < 8; i++) for (const bit of [1, 2, 4]) if ((i & bit) === 0) edges.push([i, i | bit]);
      expect(relativeError(between(0, corner, 8, edges).R, exact)).toBeLessThan(LAST_DIGIT);
    },
  );

  // K. W. Oh, K. Lee, B. Ahn & E. P. Furlani, "Design of pressure-driven microfluidic networks using electric circuit analogy",
  // Lab Chip 12 (2012) 515: equivalent circuit R1 + (4R1 ∥ 2R1 ∥ 4R1) + R1 = 3R1. Seen quoted.
  test('the equivalent circuit of Oh et al. has 3 R1, and splits 1 : 2 : 1', () => {
    const feeder = { lengthMm: 10 };
    const { network, run } = networkOf(
      [
        { from: 0, to: 1, ...feeder },
        { from: 1, to: 2, lengthMm: 40 },
        { from: 1, to: 2, lengthMm: 20 },
        { from: 1, to: 2, lengthMm: 40 },
        { from: 2, to: 3, ...feeder },
      ],
      [
        { node: 0, condition: { kind: 'pressure', pressurePa: 3000 } },
        { node: 3, condition: { kind: 'open' } },
      ],
    );
    const { portFlow, reachFlow, reachResistance } = solveFlow(network, run);
    expect((portFlow[0] * 3 * reachResistance[0]) / 3000).toBeCloseTo(1, 14);
    expect(reachFlow[2] / reachFlow[1]).toBeCloseTo(2, 14);
    expect(reachFlow[3]).toBe(reachFlow[1]);
  });
});
