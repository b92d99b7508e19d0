import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type Analysis, analyse } from '../../src/sparse/analyse.ts';
import { type Factor, factor, PivotError } from '../../src/sparse/factor.ts';
import type { GraphPattern } from '../../src/sparse/pattern.ts';
import { solve } from '../../src/sparse/solve.ts';
import { graphOf, gridEdges, randomEdges, randomFrom } from '../solve/graphs.ts';
import { type ExactEdge, exactly, ONE, relativeError, solveExactly, ZERO } from '../solve/rational.ts';

const patternOf = (nodeCount: number, edges: readonly (readonly [number, number])[]): GraphPattern => {
  const { from, to } = graphOf(nodeCount, edges);
  return { nodeCount, edgeFrom: from, edgeTo: to };
};

function matrixOf(
  { nodeCount, edgeFrom, edgeTo }: GraphPattern,
  weight: Float64Array,
  ground: Float64Array,
): number[][] {
  const A = Array.from({ length: nodeCount }, (_, i) => {
    const line = new Array<number>(nodeCount).fill(0);
    line[i] = ground[i];
    return line;
  });
  edgeFrom.forEach((a, e) => {
    const b = edgeTo[e];
    if (a === b) return;
    A[a][a] += weight[e];
    A[b][b] += weight[e];
    A[a][b] -= weight[e];
    A[b][a] -= weight[e];
  });
  return A;
}

/** L as a full matrix, rows and columns by place. */
function lowerOf(
  { nodeCount, blockCount, firstColumn, rowStart, row, panelStart }: Analysis,
  { entry }: Factor,
): number[][] {
  const L = Array.from({ length: nodeCount }, (_, i) => {
    const line = new Array<number>(nodeCount).fill(0);
    line[i] = 1;
    return line;
  });
  for (let b = 0; b < blockCount; b++) {
    const columns = firstColumn[b + 1] - firstColumn[b];
    const rows = [
      ...Array.from({ length: columns }, (_, k) => firstColumn[b] + k),
      ...row.subarray(rowStart[b], rowStart[b + 1]),
    ];
    rows.forEach((i, r) => {
      for (let c = 0; c < Math.min(r, columns); c++)
        L[i][firstColumn[b] + c] = -entry[panelStart[b] + r * columns + c];
    });
  }
  return L;
}

function randomCase(seed: number, most: number) {
  const random = randomFrom(seed);
  const n = 1 + Math.floor(random() * most);
  const pattern = patternOf(n, randomEdges(n, Math.floor(random() * 4 * n), random));
  const weight = Float64Array.from(pattern.edgeFrom, () => 10 ** (4 * random() - 2));
  const ground = Float64Array.from({ length: n }, (_, i) =>
    i === 0 || random() < 0.2 ? random() + 0.01 : 0,
  );
  const rhs = Float64Array.from({ length: n }, () => random() - 0.5);
  return { pattern, weight, ground, rhs };
}

describe('factor', () => {
  test('gives L and D whose product is the matrix', () => {
    fc.assert(
      fc.property(fc.integer(), (seed) => {
        const { pattern, weight, ground } = randomCase(seed, 70);
        const analysis = analyse(pattern);
        const factored = factor(analysis, weight, ground);
        const L = lowerOf(analysis, factored);
        const A = matrixOf(pattern, weight, ground);
        const n = pattern.nodeCount;
        for (let i = 0; i < n; i++) {
          for (let j = 0; j <= i; j++) {
            let sum = 0;
            let size = 0;
            for (let k = 0; k <= j; k++) {
              sum += L[i][k] * factored.pivot[k] * L[j][k];
              size += Math.abs(L[i][k] * factored.pivot[k] * L[j][k]);
            }
            expect(Math.abs(sum - A[analysis.order[i]][analysis.order[j]])).toBeLessThanOrEqual(1e-13 * size);
          }
        }
      }),
      { seed: 11, numRuns: 60 },
    );
  });

  test('solves to a residual of rounding size on blocks of every width', () => {
    const complete = (n: number) =>
      Array.from({ length: n * n }, (_, k) => [Math.floor(k / n), k % n] as const);
    for (const n of [1, 2, 3, 4, 5, 7, 8, 47, 48, 49, 97, 150]) {
      const pattern = patternOf(n, complete(n));
      const random = randomFrom(n);
      const weight = Float64Array.from(pattern.edgeFrom, () => random());
      const ground = Float64Array.from({ length: n }, () => random());
      const rhs = Float64Array.from({ length: n }, () => random());
      expect(residual(pattern, weight, ground, rhs)).toBeLessThan(1e-14);
    }
    const grid = patternOf(60 * 60, gridEdges(60, 60));
    const ground = new Float64Array(3600);
    ground[0] = 1;
    const rhs = Float64Array.from({ length: 3600 }, (_, i) => Math.sin(i));
    expect(residual(grid, new Float64Array(grid.edgeFrom.length).fill(1), ground, rhs)).toBeLessThan(1e-13);
  });

  test('solves random graphs with hubs, parallel edges and edges from a node to itself', () => {
    fc.assert(
      fc.property(fc.integer(), (seed) => {
        const { pattern, weight, ground, rhs } = randomCase(seed, 300);
        expect(residual(pattern, weight, ground, rhs)).toBeLessThan(1e-13);
      }),
      { seed: 12, numRuns: 60 },
    );
  });

  test('keeps every digit of every unknown where weights lie 1e24 apart and the ground is the faintest of them', () => {
    const random = randomFrom(5);
    for (let k = 0; k < 20; k++) {
      const n = 9;
      const edges = randomEdges(n, 12, random).filter(([a, b]) => a !== b);
      const pattern = patternOf(n, edges);
      const weight = Float64Array.from(edges, () => 10 ** (24 * random() - 12));
      const ground = new Float64Array(n);
      ground[n - 1] = 1e-14;
      const rhs = new Float64Array(n);
      rhs[0] = 1;
      const x = solve(factor(analyse(pattern), weight, ground), rhs);
      const exactEdges: ExactEdge[] = edges.map(([from, to], e) => ({
        from,
        to,
        resistance: { n: exactly(weight[e]).d, d: exactly(weight[e]).n },
      }));
      exactEdges.push({ from: n - 1, to: n, resistance: { n: exactly(1e-14).d, d: exactly(1e-14).n } });
      const { pressure } = solveExactly(n + 1, exactEdges, new Map([[n, ZERO]]), new Map([[0, ONE]]));
      for (let i = 0; i < n; i++) expect(relativeError(x[i], pressure[i])).toBeLessThan(1e-14);
    }
  });

  test('gives the same bits when its memory is used again', () => {
    const { pattern, weight, ground, rhs } = randomCase(77, 200);
    const analysis = analyse(pattern);
    const fresh = factor(analysis, weight, ground);
    const other = factor(
      analysis,
      weight.map((w) => 3 * w),
      ground,
    );
    const again = factor(analysis, weight, ground, other);
    expect(again).toBe(other);
    expect(again.pivot).toEqual(fresh.pivot);
    expect(solve(again, rhs)).toEqual(solve(fresh, rhs));
  });

  test('names the node of a pivot that fails', () => {
    const pattern = patternOf(4, [
      [0, 1],
      [2, 3],
    ]);
    const ground = Float64Array.from([1, 0, 0, 0]);
    const weight = Float64Array.from([1, 1]);
    expect(() => factor(analyse(pattern), weight, ground)).toThrow(
      /^pivot of node [23] is 0; it must be a finite number above 0/,
    );
    expect(() =>
      factor(analyse(pattern), Float64Array.from([Number.NaN, 1]), Float64Array.from([1, 0, 1, 0])),
    ).toThrow(PivotError);
  });

  test('has nothing to do on an empty graph', () => {
    const analysis = analyse(patternOf(0, []));
    expect(
      solve(factor(analysis, new Float64Array(0), new Float64Array(0)), new Float64Array(0)),
    ).toHaveLength(0);
  });
});

/** Largest |b − A x| over the largest |A||x| + |b|. */
function residual(
  pattern: GraphPattern,
  weight: Float64Array,
  ground: Float64Array,
  rhs: Float64Array,
): number {
  const x = solve(factor(analyse(pattern), weight, ground), rhs);
  const r = rhs.map((b, i) => b - ground[i] * x[i]);
  const size = rhs.map((b, i) => Math.abs(b) + Math.abs(ground[i] * x[i]));
  pattern.edgeFrom.forEach((a, e) => {
    const b = pattern.edgeTo[e];
    const q = weight[e] * (x[a] - x[b]);
    r[a] -= q;
    r[b] += q;
    if (a === b) return;
    size[a] += weight[e] * (Math.abs(x[a]) + Math.abs(x[b]));
    size[b] += weight[e] * (Math.abs(x[a]) + Math.abs(x[b]));
  });
  return Math.max(...r.map(Math.abs)) / Math.max(...size);
}
