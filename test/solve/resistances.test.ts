import { describe, expect, test } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { resistancePerLength } from '../../src/physics/duct-state.ts';
import { nominalResistances } from '../../src/solve/resistances.ts';
import { networkOf } from './network-of.ts';

describe('nominalResistances', () => {
  test('gives each reach the resistance of its own width, depth and length, however often a section repeats', () => {
    const sizes = [0.05, 0.1, 0.2];
    const reaches = sizes.flatMap((widthMm) =>
      sizes.flatMap((depthMm) => [3, 7].map((lengthMm) => ({ from: 0, to: 1, widthMm, depthMm, lengthMm }))),
    );
    const { network, run } = networkOf(reaches, []);
    const { reach, tubing } = nominalResistances(network, run);
    reaches.forEach(({ widthMm, depthMm, lengthMm }, r) => {
      const exact =
        resistancePerLength(ductForm(widthMm / 1000, depthMm / 1000), { viscosityPaS: 1e-3 }) *
        (lengthMm / 1000);
      expect(reach[r] / exact).toBeCloseTo(1, 14);
    });
    expect(tubing).toHaveLength(0);
  });

  test('is NaN where width or depth is unknown', () => {
    const reaches = [
      { from: 0, to: 1, lengthMm: 1, depthMm: Number.NaN },
      { from: 0, to: 1, lengthMm: 1, widthMm: Number.NaN },
    ];
    const { network, run } = networkOf(reaches, []);
    expect([...nominalResistances(network, run).reach]).toEqual([Number.NaN, Number.NaN]);
  });
});
