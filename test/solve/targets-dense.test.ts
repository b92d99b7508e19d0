import fc from 'fast-check';
import { lusolve } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { factorDense } from '../../src/solve/targets-dense.ts';

describe('factorDense', () => {
  it('solves random systems whose rows and columns differ by many decades as another solver does', () => {
    const entry = fc.double({ min: -1, max: 1, noNaN: true });
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 7 }).chain((k) =>
          fc.record({
            A: fc.array(fc.array(entry, { minLength: k, maxLength: k }), { minLength: k, maxLength: k }),
            x: fc.array(entry, { minLength: k, maxLength: k }),
            rows: fc.array(fc.integer({ min: -12, max: 12 }), { minLength: k, maxLength: k }),
          }),
        ),
        ({ A, x, rows }) => {
          // far from singular: each row is led by its diagonal
          const k = A.length;
          const led = A.map((row, i) => row.map((a, j) => (i === j ? a + 2 * k : a)));
          const scaled = led.map((row, i) => row.map((a) => a * 10 ** rows[i]));
          const b = scaled.map((row) => row.reduce((sum, a, j) => sum + a * x[j], 0));
          const factor = factorDense(scaled);
          expect(factor.kind).toBe('regular');
          if (factor.kind !== 'regular') return;
          const found = factor.solve(b);
          const other = lusolve(
            led,
            b.map((value, i) => value / 10 ** rows[i]),
          ) as number[][];
          x.forEach((_, j) => {
            expect(Math.abs(found[j] - other[j][0])).toBeLessThan(1e-12);
          });
        },
      ),
      { seed: 5, numRuns: 200 },
    );
  });

  it('names the rows that add up to nothing, and only those', () => {
    const factor = factorDense([
      [1e-9, 2e-9, 3e-9],
      [5, 1, 2],
      [2e-3, 4e-3, 6e-3],
    ]);
    expect(factor.kind).toBe('dependent');
    if (factor.kind !== 'dependent') return;
    expect(factor.share[0]).not.toBe(0);
    expect(factor.share[1]).toBe(0);
    expect(factor.share[2]).toBeCloseTo(-factor.share[0], 12);
  });

  it('does not name a row that has part in it by rounding only', () => {
    const [a, b] = [
      [0.31, 0.72, 0.13, 0.94],
      [0.55, 0.26, 0.87, 0.38],
    ];
    const sum = a.map((value, j) => value / 3 + b[j] / 7);
    const factor = factorDense([a, b, [0.91, 0.32, 0.63, 0.14], sum]);
    expect(factor.kind).toBe('dependent');
    if (factor.kind !== 'dependent') return;
    expect(Array.from(factor.share, (value) => value !== 0)).toEqual([true, true, false, true]);
  });

  it('finds a row of noughts dependent by itself', () => {
    const factor = factorDense([
      [1, 0],
      [0, 0],
    ]);
    expect(factor).toMatchObject({ kind: 'dependent' });
  });
});
