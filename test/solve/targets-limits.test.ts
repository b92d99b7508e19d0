import { describe, expect, test } from 'vitest';
import { pumpReach, type Response, settingsWithin } from '../../src/solve/targets-limits.ts';

/** A syringe pump at −3 nL/s against 1 kPa: 2 kPa more for every nL/s. */
const drawing: Response = {
  setting: -3e-9,
  observed: { at: 0, slope: 1 },
  supplyPressurePa: { at: 1e3, slope: 2e12 },
  flowM3s: { at: -3e-9, slope: 1 },
};
const LIMITS = { minPressurePa: null, maxPressurePa: null, maxFlowM3s: null };

describe('a pump', () => {
  test('draws as much as it gives', () => {
    const { low, high } = settingsWithin(drawing, { ...LIMITS, maxFlowM3s: 4e-9 }) ?? { low: 0, high: 0 };
    expect(low).toBeCloseTo(-4e-9, 20);
    expect(high).toBeCloseTo(4e-9, 20);
    expect(pumpReach(drawing, { ...LIMITS, maxFlowM3s: 4e-9 }).isWithin).toBe(true);
    expect(pumpReach(drawing, { ...LIMITS, maxFlowM3s: 2e-9 })).toMatchObject({
      isWithin: false,
      nearest: -2e-9,
    });
  });

  test('is held by its pressures at the far end of the tubing, least and most', () => {
    const { low, high } = settingsWithin(drawing, {
      ...LIMITS,
      minPressurePa: -1e3,
      maxPressurePa: 5e3,
    }) ?? { low: 0, high: 0 };
    expect(low).toBeCloseTo(-4e-9, 20);
    expect(high).toBeCloseTo(-1e-9, 20);
  });

  test('of limits that exclude each other can do nothing', () => {
    const limits = { ...LIMITS, minPressurePa: 2e4, maxFlowM3s: 4e-9 };
    expect(pumpReach(drawing, limits)).toEqual({ isWithin: false, interval: null, nearest: null });
  });

  test('whose response does not move is within its limits at every setting or at none', () => {
    const still = { ...drawing, supplyPressurePa: { at: 1e3, slope: 0 } };
    const every = { low: -Infinity, high: Infinity };
    expect(settingsWithin(still, { ...LIMITS, minPressurePa: 1e3, maxPressurePa: 1e3 })).toEqual(every);
    expect(settingsWithin(still, { ...LIMITS, maxPressurePa: 999 })).toBeNull();
    expect(settingsWithin(still, { ...LIMITS, minPressurePa: 1001 })).toBeNull();
  });

  test('against whose setting the pressure falls has its limits the other way round', () => {
    const falling = { ...drawing, supplyPressurePa: { at: 1e3, slope: -2e12 } };
    const { low, high } = settingsWithin(falling, { ...LIMITS, minPressurePa: 0, maxPressurePa: 3e3 }) ?? {
      low: 0,
      high: 0,
    };
    expect(low).toBeCloseTo(-4e-9, 20);
    expect(high).toBeCloseTo(-2.5e-9, 20);
  });
});
