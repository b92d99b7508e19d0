import { describe, expect, test } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import {
  ductState,
  fastestTime,
  flowForShear,
  meanTime,
  residenceTime,
  resistancePerLength,
  shareInside,
  shearPerGradient,
  volumeOf,
  wallShear,
} from '../../src/physics/duct-state.ts';
import { sectionForm } from '../../src/physics/section.ts';

const FLUID = { viscosityPaS: 1.3e-3, densityKgM3: 1010 };
const FORM = ductForm(300e-6, 80e-6);
const FLOW = 4e-10;
const WALLS = ['floor', 'side'] as const;
const MEASURES = ['mean', 'peak'] as const;

describe('the state of a section', () => {
  const state = ductState(FORM, FLOW, FLUID);

  test('balances the pressure gradient by the shear on all four walls', () => {
    const pull = 2 * (FORM.widthM * state.floorMeanPa + FORM.depthM * state.sideMeanPa);
    expect(pull / (state.gradientPaM * FORM.areaM2)).toBeCloseTo(1, 12);
    expect(state.gradientPaM / FLOW).toBeCloseTo(resistancePerLength(FORM, FLUID), 0);
  });

  test('carries the flow at its mean velocity, and is fastest by the factor of the profile', () => {
    expect((state.meanVelocity * 300e-6 * 80e-6) / FLOW).toBeCloseTo(1, 12);
    expect(state.peakVelocity / state.meanVelocity).toBeCloseTo(FORM.peakOverMean, 12);
    const diameterM = (2 * 300e-6 * 80e-6) / 380e-6;
    expect(state.reynolds / ((1010 * state.meanVelocity * diameterM) / 1.3e-3)).toBeCloseTo(1, 12);
  });

  test('does not ask which way the fluid flows', () => {
    expect(ductState(FORM, -FLOW, FLUID)).toEqual(state);
  });

  test('says the same of each wall by name as in its columns', () => {
    expect(WALLS.map((wall) => MEASURES.map((at) => wallShear(state, wall, at)))).toEqual([
      [state.floorMeanPa, state.floorPeakPa],
      [state.sideMeanPa, state.sidePeakPa],
    ]);
    expect(shearPerGradient(FORM, 'side', 'peak')).toBe(FORM.sidePeak);
  });

  test('has the shear that its flow was asked for', () => {
    for (const wall of WALLS)
      for (const at of MEASURES) {
        const flow = flowForShear(FORM, wall, at, 0.7, FLUID);
        expect(wallShear(ductState(FORM, flow, FLUID), wall, at)).toBeCloseTo(0.7, 12);
      }
  });

  test('has all of a wall inside a range that holds nought to its peak, and none above the peak', () => {
    for (const wall of WALLS) {
      const peak = wallShear(state, wall, 'peak');
      expect(shareInside(state, wall, { minPa: 0, maxPa: peak })).toBe(1);
      expect(shareInside(state, wall, { minPa: 1.01 * peak, maxPa: null })).toBe(0);
    }
    const between = { minPa: 0.9 * state.sidePeakPa, maxPa: null };
    expect(shareInside(state, 'side', between)).not.toBeCloseTo(shareInside(state, 'floor', between), 2);
  });

  test('takes an isotropic etch by its true floor', () => {
    const etched = sectionForm('isotropic', 300e-6, 80e-6);
    expect(ductState(etched, FLOW, FLUID).floorMeanPa).toBeGreaterThan(state.floorMeanPa);
  });
});

test('times are length over velocity, and volume over flow whatever its sign; without flow they never end', () => {
  const state = ductState(FORM, FLOW, FLUID);
  const seconds = (0.02 * 300e-6 * 80e-6) / FLOW;
  expect(meanTime(state, 0.02)).toBeCloseTo(seconds, 12);
  expect(fastestTime(state, 0.02)).toBeCloseTo(seconds / FORM.peakOverMean, 12);
  expect(residenceTime(volumeOf(FORM, 0.02), -FLOW)).toBeCloseTo(seconds, 12);
  expect(meanTime(ductState(FORM, 0, FLUID), 0.02)).toBe(Infinity);
});

test('a viscosity that is nought, negative, infinite or not a number is refused', () => {
  for (const viscosityPaS of [0, -1e-3, Infinity, Number.NaN])
    expect(() => resistancePerLength(FORM, { viscosityPaS })).toThrow(/viscosity must be above 0/);
});
