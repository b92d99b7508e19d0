import { expect, test } from 'vitest';
import { EVEN_DIMENSIONS, uniformFrom } from '../../src/spread/low-discrepancy.ts';

const BASES = [2, 3, 5, 7];

test.each(BASES.map((base, dimension) => [dimension, base]))(
  'of dimension %i the first %i^k numbers fall one into each equal part',
  (dimension, base) => {
    for (const seed of [0, 1, 123456789012]) {
      const uniform = uniformFrom(seed);
      const parts = base ** 4;
      const hits = new Uint8Array(parts);
      for (let i = 0; i < parts; i++) hits[Math.floor(uniform(dimension, i) * parts)]++;
      expect(hits.every((count) => count === 1)).toBe(true);
    }
  },
);

test('every number lies strictly between 0 and 1, in every dimension and for large indices', () => {
  const uniform = uniformFrom(1);
  for (let dimension = 0; dimension < EVEN_DIMENSIONS + 8; dimension++) {
    for (const index of [0, 1, 2, 999, 999_999, 2 ** 31 - 1]) {
      const u = uniform(dimension, index);
      expect(u).toBeGreaterThan(0);
      expect(u).toBeLessThan(1);
    }
  }
});

test('a number depends on seed, dimension and index alone, and seeds beyond 32 bits differ', () => {
  const [a, b] = [uniformFrom(9), uniformFrom(9)];
  const backwards = Array.from({ length: 200 }, (_, i) => b(i % 40, 199 - i)).reverse();
  for (let i = 0; i < 200; i++) expect(a((199 - i) % 40, i)).toBe(backwards[i]);
  for (const dimension of [0, 1, 31, 32]) {
    expect(uniformFrom(1)(dimension, 7)).not.toBe(uniformFrom(2)(dimension, 7));
    expect(uniformFrom(1)(dimension, 7)).not.toBe(uniformFrom(1 + 2 ** 32)(dimension, 7));
  }
});

/** Largest gap between a column's empirical distribution and the uniform one, times √n (Kolmogorov and Smirnov). */
function gap(column: Float64Array): number {
  const sorted = column.slice().sort();
  const n = sorted.length;
  return Math.sqrt(n) * sorted.reduce((most, u, i) => Math.max(most, (i + 1) / n - u, u - i / n), 0);
}

test('random dimensions are uniform and do not follow one another or the even ones', () => {
  const n = 20_000;
  const uniform = uniformFrom(4);
  const columns = [0, 31, 32, 33, 500].map((dimension) =>
    Float64Array.from({ length: n }, (_, i) => uniform(dimension, i)),
  );
  for (const column of columns) expect(gap(column)).toBeLessThan(1.95); // 1 in 1000 of random columns lie above
  columns.forEach((a, i) => {
    for (const b of columns.slice(i + 1)) {
      const covariance = a.reduce((sum, u, k) => sum + (u - 0.5) * (b[k] - 0.5), 0) / n;
      expect(Math.abs(covariance * 12)).toBeLessThan(4 / Math.sqrt(n));
    }
  });
});

test('an integral over six dimensions converges far faster than with independent draws', () => {
  const n = 4096;
  const errors = Array.from({ length: 12 }, (_, seed) => {
    const uniform = uniformFrom(seed);
    let sum = 0;
    for (let i = 0; i < n; i++) {
      let product = 1;
      for (let d = 0; d < 6; d++) product *= 0.5 + uniform(d, i);
      sum += product;
    }
    return sum / n - 1;
  });
  const rms = Math.sqrt(errors.reduce((sum, error) => sum + error * error, 0) / errors.length);
  // independent: variance (13/12)⁶ − 1 over n
  const independent = Math.sqrt(((13 / 12) ** 6 - 1) / n);
  expect(rms).toBeLessThan(independent / 6);
});

test('a seed that is no whole number from 0 up is refused', () => {
  for (const seed of [-1, 0.5, Number.NaN, 2 ** 60])
    expect(() => uniformFrom(seed)).toThrow('a seed is a whole number from 0 up');
});
