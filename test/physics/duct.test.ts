import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { DuctFactors } from '../../src/physics/duct.ts';
import { ductForm } from '../../src/physics/duct.ts';
import { exactDuct, exactLongWallShear } from './exact-duct-series.ts';
import { floorShareInside, floorShearAt, sideShareInside, sideShearAt } from './wall-shear.ts';

const ASPECTS = [1, 1.0001, 1.1, 1.5, 2, Math.PI, 5, 10, 31.7, 100, 1000, 1e4];
const NAMES: readonly (keyof DuctFactors)[] = [
  'resistance',
  'peakOverMean',
  'floorMean',
  'floorPeak',
  'sideMean',
  'sidePeak',
];

/** Largest relative difference, in units of a double's last place at 1. */
function ulps(value: number, exact: number): number {
  return Math.abs(value / exact - 1) / Number.EPSILON;
}

describe('the duct series', () => {
  it.each(ASPECTS)(
    'equals the plain series in 60-digit arithmetic to the last bits at width/depth %f',
    (aspect) => {
      const exact = exactDuct(aspect);
      const form = ductForm(aspect, 1);
      expect(ulps(form.resistance, 12 / (aspect * exact.flow))).toBeLessThan(4);
      expect(ulps(form.peakOverMean, exact.peakOverMean)).toBeLessThan(4);
      expect(ulps(form.floorMean, exact.longMean)).toBeLessThan(3);
      expect(ulps(form.floorPeak, exact.longPeak)).toBeLessThan(3);
      expect(ulps(form.sideMean, exact.shortMean)).toBeLessThan(3);
      expect(ulps(form.sidePeak, exact.shortPeak)).toBeLessThan(3);
    },
  );

  it.each(ASPECTS)('is the same for a duct on its side, with floor and side exchanged, at %f', (aspect) => {
    const flat = ductForm(aspect, 1);
    const tall = ductForm(1, aspect);
    expect(tall.resistance).toBe(flat.resistance);
    expect(tall.hydraulicDiameterM).toBe(flat.hydraulicDiameterM);
    // At the square both walls are the floor of the one or the other formula.
    const digits = aspect === 1 ? 15 : 18;
    expect(tall.floorPeak).toBeCloseTo(flat.sidePeak, digits);
    expect(tall.sideMean).toBeCloseTo(flat.floorMean, digits);
  });

  it('balances pressure on the section with shear on its walls, to 2e-15', () => {
    for (const aspect of ASPECTS) {
      const form = ductForm(aspect, 1);
      const wallForce = 2 * form.floorMean * aspect + 2 * form.sideMean;
      expect(Math.abs(wallForce / aspect - 1)).toBeLessThan(2e-15);
    }
  });

  it('scales resistance with the inverse fourth power and shear with the first of size', () => {
    const small = ductForm(3e-5, 1e-5);
    const large = ductForm(3, 1);
    expect(small.resistance / large.resistance).toBeCloseTo(1e20, -6);
    expect(small.floorPeak / large.floorPeak).toBeCloseTo(1e-5, 18);
    expect(small.peakOverMean).toBeCloseTo(large.peakOverMean, 14);
  });

  it('runs smoothly through the square', () => {
    const step = 1e-9;
    const [below, above] = [ductForm(1 - step, 1), ductForm(1 + step, 1)];
    for (const name of NAMES) expect(Math.abs(above[name] / below[name] - 1)).toBeLessThan(8 * step);
  });

  it('has exact logarithmic derivatives: they equal central differences to 1e-9, and both sides add up to the scaling power', () => {
    const power: DuctFactors = {
      resistance: -4,
      peakOverMean: 0,
      floorMean: 1,
      floorPeak: 1,
      sideMean: 1,
      sidePeak: 1,
    };
    for (const width of [0.01, 0.1, 0.5, 0.999, 1, 1.001, 1.7, 4, 25, 300]) {
      const form = ductForm(width, 1);
      const d = 1e-4;
      for (const name of NAMES) {
        // Fourth order: (8[f(d) − f(−d)] − [f(2d) − f(−2d)])/12d.
        const at = (shift: number) => Math.log(ductForm(width * Math.exp(shift * d), 1)[name]);
        const slope = (8 * (at(1) - at(-1)) - (at(2) - at(-2))) / (12 * d);
        expect(Math.abs(form.byWidth[name] - slope), `${name} at ${width}`).toBeLessThan(1e-9);
        expect(form.byWidth[name] + form.byDepth[name]).toBeCloseTo(power[name], 13);
      }
    }
  });

  it('refuses a side that is nought, negative, infinite or not a number', () => {
    for (const bad of [0, -1e-6, Infinity, Number.NaN]) {
      expect(() => ductForm(bad, 1e-5)).toThrow(/width must be above 0 m/);
      expect(() => ductForm(1e-5, bad)).toThrow(/depth must be above 0 m/);
    }
  });
});

describe('shear across a wall', () => {
  it('equals the plain series in 60-digit arithmetic to 1e-13 from a fiftieth of the way to the middle on', () => {
    for (const aspect of [1, 2, 7]) {
      for (const fraction of [0.02, 0.1, 0.25, 0.5, 0.75, 1]) {
        const exact = exactLongWallShear(aspect, fraction, 2000);
        const shear = floorShearAt(ductForm(aspect, 1), 1, ((1 - fraction) * aspect) / 2);
        expect(Math.abs(shear / exact - 1), `${aspect} ${fraction}`).toBeLessThan(1e-13);
      }
    }
  });

  it('has the mean and peak of the closed sums on both walls, whichever is the floor', () => {
    for (const [width, depth] of [
      [1, 1],
      [2, 1],
      [1, 2],
      [10, 1],
      [1, 10],
      [1, 80],
    ] as const) {
      const form = ductForm(width, depth);
      expect(ulps(floorShearAt(form, 1, 0), form.floorPeak)).toBeLessThan(4);
      expect(ulps(sideShearAt(form, 1, 0), form.sidePeak)).toBeLessThan(4);
      expect(meanOver(width, (y) => floorShearAt(form, 1, y)) / form.floorMean).toBeCloseTo(1, 9);
      expect(meanOver(depth, (z) => sideShearAt(form, 1, z)) / form.sideMean).toBeCloseTo(1, 9);
    }
  });

  it('is symmetric, falls from the middle to nought in the corner, and bears the sign of the gradient', () => {
    for (const form of [ductForm(3, 1), ductForm(1, 3), ductForm(1, 1)]) {
      let last = Infinity;
      for (let i = 0; i <= 200; i++) {
        const y = (i / 200) * (form.widthM / 2);
        const shear = floorShearAt(form, 1, y);
        expect(shear).toBe(floorShearAt(form, 1, -y));
        expect(shear).toBe(-floorShearAt(form, -1, y));
        expect(shear).toBeLessThan(last);
        last = shear;
      }
      expect(last).toBe(0);
    }
  });

  it('is the same on all four walls of a square', () => {
    const form = ductForm(1, 1);
    const nearly = ductForm(1 + 1e-13, 1);
    for (const y of [0, 0.1, 0.3, 0.45, 0.499]) {
      // nearly is taken by the series of the short wall on its side.
      expect(sideShearAt(nearly, 1, y) / floorShearAt(form, 1, y)).toBeCloseTo(1, 11);
    }
  });
});

describe('the share of a wall inside a shear range', () => {
  it('finds the place on either wall whose shear is a limit, to the slack of 1e-12', () => {
    for (const [width, depth] of [
      [1, 1],
      [2, 1],
      [1, 2],
      [10, 1],
      [1, 10],
    ] as const) {
      const form = ductForm(width, depth);
      for (const share of [1e-3, 0.1, 0.5, 0.9, 0.999]) {
        const floorLimit = floorShearAt(form, 40, (share * width) / 2);
        const above = floorShareInside(form, 40, { minPa: floorLimit, maxPa: null });
        const below = floorShareInside(form, 40, { minPa: null, maxPa: floorLimit });
        expect(floorShearAt(form, 40, (above * width) / 2) / floorLimit).toBeCloseTo(1, 11);
        expect(floorShearAt(form, 40, ((1 - below) * width) / 2) / floorLimit).toBeCloseTo(1, 11);
        const sideLimit = sideShearAt(form, 40, (share * depth) / 2);
        const onSide = sideShareInside(form, 40, { minPa: sideLimit, maxPa: null });
        expect(sideShearAt(form, 40, (onSide * depth) / 2) / sideLimit).toBeCloseTo(1, 11);
      }
    }
  });

  it('counts the same share as a fine tally of the profile, for any duct, gradient and range', () => {
    const side = fc.double({ min: 0.05, max: 20, noNaN: true });
    const limit = fc.double({ min: 0, max: 1.2, noNaN: true });
    fc.assert(
      fc.property(side, side, limit, limit, (width, depth, a, b) => {
        const form = ductForm(width, depth);
        const gradient = -7;
        const peak = Math.abs(gradient) * form.floorPeak;
        const range = { minPa: Math.min(a, b) * peak, maxPa: Math.max(a, b) * peak };
        const cells = 2000;
        let inside = 0;
        for (let i = 0; i < cells; i++) {
          const shear = Math.abs(floorShearAt(form, gradient, ((i + 0.5) / cells) * (width / 2)));
          if (shear >= range.minPa && shear <= range.maxPa) inside++;
        }
        expect(Math.abs(floorShareInside(form, gradient, range) - inside / cells)).toBeLessThan(2 / cells);
      }),
      { seed: 11, numRuns: 60 },
    );
  });

  it('is all below an open range, nothing outside the profile, and does not turn on rounding at the peak', () => {
    for (const form of [ductForm(1, 1), ductForm(1000, 1), ductForm(1, 1000)]) {
      const peak = form.floorPeak;
      expect(floorShareInside(form, 1, { minPa: null, maxPa: null })).toBe(1);
      expect(floorShareInside(form, 1, { minPa: 0, maxPa: peak })).toBe(1);
      expect(floorShareInside(form, 1, { minPa: peak * 1.001, maxPa: null })).toBe(0);
      expect(floorShareInside(form, 1, { minPa: null, maxPa: -1 })).toBe(0);
      expect(floorShareInside(form, 0, { minPa: null, maxPa: 1 })).toBe(1);
      expect(floorShareInside(form, 0, { minPa: 1e-9, maxPa: 1 })).toBe(0);
    }
    const flat = ductForm(1000, 1);
    expect(floorShareInside(flat, 1, { minPa: flat.floorPeak, maxPa: null })).toBeGreaterThan(0.97);
  });

  it('refuses a gradient or limit that is not a number', () => {
    const form = ductForm(1, 1);
    expect(() => floorShareInside(form, Number.NaN, { minPa: 0, maxPa: 1 })).toThrow(
      /gradient must be finite/,
    );
    expect(() => floorShareInside(form, 1, { minPa: Number.NaN, maxPa: 1 })).toThrow(/not a number/);
  });
});

/** Mean over a wall by tanh-sinh quadrature, which is blind to the logarithm in the corner's slope. */
function meanOver(wall: number, shear: (fromMiddle: number) => number): number {
  let sum = 0;
  const step = 0.02;
  for (let k = -200; k <= 200; k++) {
    const t = k * step;
    const u = (Math.PI / 2) * Math.sinh(t);
    const weight = ((Math.PI / 2) * Math.cosh(t)) / Math.cosh(u) ** 2;
    const place = Math.min(Math.abs(Math.tanh(u)), 1);
    sum += weight * shear((place * wall) / 2);
  }
  return (sum * step) / 2;
}
