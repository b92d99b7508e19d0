import { expect, test } from 'vitest';
import { normalQuantile } from '../../src/spread/normal-quantile.ts';
import { chanceOf, quantile, summarise } from '../../src/spread/statistics.ts';
import { deviate, standardDeviation } from '../../src/spread/variables.ts';

test('the mean keeps what a plain sum would lose', () => {
  expect(summarise(Float64Array.of(1e17, 1, -1e17, 1)).mean).toBe(0.5);
});

test('the standard deviation is exact for values far from nought', () => {
  const column = Float64Array.from({ length: 1001 }, (_, i) => 1e9 + (i - 500) * 1e-3);
  // of n equal steps d: d √(n(n + 1)/12)
  expect(summarise(column).sd).toBeCloseTo(1e-3 * Math.sqrt((1001 * 1002) / 12), 6);
});

test('quantiles lie at (n + 1/3)p + 1/3 and at the ends beyond', () => {
  const sorted = Float64Array.from({ length: 10 }, (_, i) => i + 1);
  expect(quantile(sorted, 0.25)).toBeCloseTo((10 + 1 / 3) * 0.25 + 1 / 3, 12);
  expect(quantile(sorted, 0.5)).toBeCloseTo(5.5, 12);
  expect(quantile(sorted, 0.001)).toBe(1);
  expect(quantile(sorted, 0.999)).toBe(10);
});

test('values that do not exist are left out, and a column without any has no numbers', () => {
  expect(summarise(Float64Array.of(1, Number.NaN, 3, Number.POSITIVE_INFINITY))).toMatchObject({
    count: 2,
    mean: 2,
  });
  expect(summarise(Float64Array.of(Number.NaN)).mean).toBeNaN();
  expect(summarise(new Float64Array(0)).p2_5).toBeNaN();
  expect(summarise(Float64Array.of(4)).sd).toBeNaN();
});

test('no draw gives no chance; none and all good give ends of exactly 0 and 1', () => {
  expect(chanceOf(0, 0)).toBeNull();
  expect(chanceOf(0, 50)).toMatchObject({ share: 0, low: 0 });
  expect(chanceOf(50, 50)).toMatchObject({ share: 1, high: 1 });
});

test('a tolerance is 2 sigma of a normal, a limit the half-width of a uniform', () => {
  const normal = { kind: 'relative', value: 0.05, distribution: 'normal' } as const;
  const uniform = { ...normal, distribution: 'uniform' } as const;
  expect(standardDeviation(normal)).toBe(0.025);
  expect(standardDeviation(uniform)).toBeCloseTo(0.05 / Math.sqrt(3), 15);
  expect(deviate(normal, 0.975)).toBeCloseTo(0.025 * normalQuantile(0.975), 15);
  expect(deviate(uniform, 0.75)).toBeCloseTo(0.025, 15);
  expect(deviate(uniform, 1e-12)).toBeGreaterThan(-0.05);
});

test('the normal quantile is odd, and goes out to the smallest numbers', () => {
  for (const p of [1e-300, 1e-16, 1e-5, 0.07, 0.075, 0.0755, 0.3]) {
    expect(normalQuantile(p)).toBeLessThan(0);
    if (p > 1e-15) expect(normalQuantile(1 - p)).toBeCloseTo(-normalQuantile(p), 1);
  }
  expect(normalQuantile(1e-300)).toBeCloseTo(-37.0471, 4);
  for (const p of [0, 1, -0.1, Number.NaN]) expect(() => normalQuantile(p)).toThrow('between 0 and 1');
});
