import { describe, expect, it } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { isotropicFloorMean, isotropicSection, sectionForm } from '../../src/physics/section.ts';
import { floorShareInside } from './wall-shear.ts';

describe('shape factors of a profile', () => {
  const mask = 100e-6;
  const depth = 40e-6;
  const { ductWidthM } = isotropicSection(mask, depth);
  const form = sectionForm('isotropic', ductWidthM, depth);

  it('are the duct’s own for a rectangle', () => {
    expect(sectionForm('rectangle', mask, depth)).toEqual(ductForm(mask, depth));
  });

  it('take the mean over the true floor of an isotropic etch, which is as wide as the mask', () => {
    expect(form.floorWidthM).toBeCloseTo(mask, 15);
    expect(form.floorMean).toBeCloseTo(isotropicFloorMean(mask, depth), 15);
    expect(form.floorMean).toBeGreaterThan(ductForm(ductWidthM, depth).floorMean);
    expect(form.resistance).toBe(ductForm(ductWidthM, depth).resistance);
  });

  it('give the share of the true floor', () => {
    const above = { minPa: form.floorMean * 0.98, maxPa: null };
    expect(floorShareInside(form, 1, above)).toBeGreaterThan(
      floorShareInside(ductForm(ductWidthM, depth), 1, above),
    );
  });

  it('know how the mean moves with width and depth, against differences of another step', () => {
    const h = 1e-3;
    const at = (w: number, d: number): number => Math.log(sectionForm('isotropic', w, d).floorMean);
    const byWidth =
      (at(ductWidthM * (1 + h), depth) - at(ductWidthM * (1 - h), depth)) / Math.log((1 + h) / (1 - h));
    const byDepth =
      (at(ductWidthM, depth * (1 + h)) - at(ductWidthM, depth * (1 - h))) / Math.log((1 + h) / (1 - h));
    expect(form.byWidth.floorMean).toBeCloseTo(byWidth, 5);
    expect(form.byDepth.floorMean).toBeCloseTo(byDepth, 5);
  });

  it('refuse an isotropic width that leaves no mask', () => {
    expect(() => sectionForm('isotropic', depth, depth)).toThrow(/above 0 m/);
  });
});
