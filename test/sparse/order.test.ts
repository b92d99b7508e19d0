import { describe, expect, test } from 'vitest';
import { analyse } from '../../src/sparse/analyse.ts';
import { orderForLittleFill } from '../../src/sparse/order.ts';
import { adjacencyOf, type GraphPattern } from '../../src/sparse/pattern.ts';
import { graphOf, gridEdges, randomEdges, randomFrom, shuffled } from '../solve/graphs.ts';

const patternOf = (nodeCount: number, edges: readonly (readonly [number, number])[]): GraphPattern => {
  const { from, to } = graphOf(nodeCount, edges);
  return { nodeCount, edgeFrom: from, edgeTo: to };
};

/** Entries of L below the diagonal for an order, by eliminating in sets. */
function fillOf(pattern: GraphPattern, order: Iterable<number>): number {
  const near = neighbourSets(pattern);
  let fill = 0;
  for (const k of order) fill += eliminate(near, k);
  return fill;
}

/** Fill of the exact minimum degree order, ties to the lowest number. */
function leastDegreeFill(pattern: GraphPattern): number {
  const near = neighbourSets(pattern);
  const left = new Set(near.keys());
  let fill = 0;
  while (left.size > 0) {
    let best = -1;
    for (const i of left) if (best < 0 || near[i].size < near[best].size) best = i;
    left.delete(best);
    fill += eliminate(near, best);
  }
  return fill;
}

function neighbourSets({ nodeCount, edgeFrom, edgeTo }: GraphPattern): Set<number>[] {
  const near = Array.from({ length: nodeCount }, () => new Set<number>());
  edgeFrom.forEach((a, e) => {
    if (a === edgeTo[e]) return;
    near[a].add(edgeTo[e]);
    near[edgeTo[e]].add(a);
  });
  return near;
}

function eliminate(near: Set<number>[], k: number): number {
  const around = [...near[k]];
  for (const i of around) {
    near[i].delete(k);
    for (const j of around) if (i !== j) near[i].add(j);
  }
  return around.length;
}

describe('orderForLittleFill', () => {
  test('names every node once on graphs of every kind', () => {
    const random = randomFrom(1);
    const cases: GraphPattern[] = [
      patternOf(0, []),
      patternOf(1, []),
      patternOf(5, []),
      patternOf(2, [[0, 1]]),
      patternOf(4, [
        [0, 0],
        [0, 1],
        [1, 0],
        [0, 1],
      ]),
      patternOf(
        400,
        Array.from({ length: 399 }, (_, k) => [0, k + 1] as const),
      ),
      patternOf(
        60,
        Array.from({ length: 60 * 60 }, (_, k) => [Math.floor(k / 60), k % 60] as const),
      ),
    ];
    for (let k = 0; k < 200; k++) {
      const n = 1 + Math.floor(random() * 80);
      cases.push(
        patternOf(
          n,
          randomEdges(n, Math.floor(random() * 3 * n), random).filter(() => random() < 0.9),
        ),
      );
    }
    for (const pattern of cases) {
      const order = orderForLittleFill(adjacencyOf(pattern));
      expect([...order].sort((a, b) => a - b)).toEqual([...new Array(pattern.nodeCount).keys()]);
    }
  });

  test('makes no fill on trees and paths', () => {
    const random = randomFrom(2);
    for (const n of [2, 3, 50, 300]) {
      expect(analyse(patternOf(n, randomEdges(n, 0, random))).fill).toBe(n - 1);
    }
  });

  test('comes within a tenth of the exact minimum degree on grids and random graphs, however they are numbered', () => {
    const random = randomFrom(3);
    let ours = 0;
    let exact = 0;
    for (let k = 0; k < 12; k++) {
      const edges = k < 6 ? gridEdges(16, 16) : randomEdges(256, 120 + 20 * k, random);
      const renumbering = shuffled(256, random);
      const pattern = patternOf(
        256,
        edges.map(([a, b]) => [renumbering[a], renumbering[b]] as const),
      );
      const order = orderForLittleFill(adjacencyOf(pattern));
      ours += fillOf(pattern, order);
      exact += leastDegreeFill(pattern);
    }
    expect(ours / exact).toBeLessThan(1.1);
  });

  test('keeps the fill of a 224 × 224 grid below 1.5 million entries', () => {
    expect(analyse(patternOf(224 * 224, gridEdges(224, 224))).fill).toBeLessThan(1.5e6);
  });

  test('sets a node that is joined to everything aside and puts it last', () => {
    const spokes = Array.from({ length: 999 }, (_, k) => [0, k + 1] as const);
    const rim = Array.from({ length: 998 }, (_, k) => [k + 1, k + 2] as const);
    const order = orderForLittleFill(adjacencyOf(patternOf(1000, [...spokes, ...rim])));
    expect(order[999]).toBe(0);
  });
});

describe('analyse', () => {
  test('counts the fill of its own order', () => {
    const random = randomFrom(4);
    for (let k = 0; k < 40; k++) {
      const n = 2 + Math.floor(random() * 60);
      const pattern = patternOf(n, randomEdges(n, Math.floor(random() * 2 * n), random));
      const analysis = analyse(pattern);
      expect(analysis.fill).toBe(fillOf(pattern, analysis.order));
      expect([...analysis.order].sort((a, b) => a - b)).toEqual([...new Array(n).keys()]);
    }
  });
});
