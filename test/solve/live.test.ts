import { describe, expect, test } from 'vitest';
import { findLiveEdges } from '../../src/solve/live.ts';
import { graphOf, randomEdges, randomFrom, shuffled } from './graphs.ts';
import { fraction, solveExactly } from './rational.ts';

describe('findLiveEdges', () => {
  test('keeps exactly the edges that carry flow under pressures and resistances at random', () => {
    let dead = 0;
    for (let seed = 1; seed <= 80; seed++) {
      const random = randomFrom(seed);
      const edges = randomEdges(9, seed % 7, random);
      const [a, b, c] = shuffled(9, random);
      // Large random integers: a flow that may be anything is nought only where it has to be.
      const some = () => fraction(1 + Math.floor(random() * 1e6));
      const { flow } = solveExactly(
        9,
        edges.map(([from, to]) => ({ from, to, resistance: some() })),
        new Map([
          [a, some()],
          [b, some()],
        ]),
        seed % 2 === 0 ? new Map([[c, some()]]) : new Map(),
      );
      const { live } = findLiveEdges(
        graphOf(9, edges),
        Int32Array.from([a, b]),
        Int32Array.from(seed % 2 === 0 ? [c] : []),
      );
      expect([...live], `seed ${seed}`).toEqual(flow.map(({ n }) => (n === 0n ? 0 : 1)));
      dead += live.filter((value) => value === 0).length;
    }
    expect(dead).toBeGreaterThan(100);
  });

  test('drops a loop that hangs on one live node, and anchors its nodes there', () => {
    const edges = [
      [0, 1],
      [1, 2],
      [1, 3],
      [3, 4],
      [4, 1],
    ] as const;
    const { live, anchor } = findLiveEdges(graphOf(5, edges), Int32Array.from([0, 2]), new Int32Array(0));
    expect([...live]).toEqual([1, 1, 0, 0, 0]);
    expect([...anchor]).toEqual([0, 1, 2, 1, 1]);
  });

  test('walks a chain of 200 000 nodes without recursion', () => {
    const n = 200_000;
    const edges = Array.from({ length: n - 1 }, (_, i) => [i, i + 1] as const);
    const { live } = findLiveEdges(graphOf(n, edges), Int32Array.from([n - 1, 0]), new Int32Array(0));
    expect(live.every((value) => value === 1)).toBe(true);
  });
});
