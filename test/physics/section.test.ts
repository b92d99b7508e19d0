import { describe, expect, it } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { isotropicFloorMean, isotropicSection } from '../../src/physics/section.ts';
import { floorShareInside, floorShearAt } from './wall-shear.ts';

describe('an isotropic etch', () => {
  it('keeps area and perimeter: mask·h + πh²/2, and walls at mask + 2h', () => {
    const { ductWidthM, stripWidthM, areaM2 } = isotropicSection(100e-6, 40e-6);
    expect(areaM2).toBeCloseTo(100e-6 * 40e-6 + (Math.PI * 40e-6 ** 2) / 2, 20);
    expect(stripWidthM).toBeCloseTo(180e-6, 15);
    expect(2 * (ductWidthM + 40e-6)).toBeCloseTo(100e-6 + 180e-6 + Math.PI * 40e-6, 15);
  });

  it('has as mean over its floor the mean of the rectangle’s profile over the mask’s width', () => {
    for (const mask of [0.5, 3, 200]) {
      const form = ductForm(isotropicSection(mask, 1).ductWidthM, 1);
      const cells = 20000;
      let sum = 0;
      for (let i = 0; i < cells; i++) sum += floorShearAt(form, 1, ((i + 0.5) / cells) * (mask / 2));
      expect(isotropicFloorMean(mask, 1)).toBeCloseTo(sum / cells, 8);
    }
  });

  it('has a share of its floor inside a range that is counted over the mask’s width alone', () => {
    const mask = 2;
    const form = ductForm(isotropicSection(mask, 1).ductWidthM, 1);
    const etched = { ...form, floorWidthM: mask };
    const atEdge = floorShearAt(form, 1, mask / 2);
    expect(floorShareInside(etched, 1, { minPa: atEdge * 0.99, maxPa: null })).toBe(1);
    expect(floorShareInside(etched, 1, { minPa: null, maxPa: atEdge * 0.99 })).toBe(0);
    const halfway = floorShearAt(form, 1, mask / 4);
    expect(floorShareInside(etched, 1, { minPa: halfway, maxPa: null })).toBeCloseTo(0.5, 10);
    expect(() => floorShareInside({ ...form, floorWidthM: 9 }, 1, { minPa: 0, maxPa: null })).toThrow(
      /span of a wall/,
    );
  });

  it('is refused without a mask opening or a depth', () => {
    expect(() => isotropicSection(0, 1e-5)).toThrow(/needs a mask and a depth above 0 m/);
    expect(() => isotropicFloorMean(1e-5, Number.NaN)).toThrow(/needs a mask and a depth above 0 m/);
  });
});
