/** An independent oracle: five-point finite differences of the duct, extrapolated, at four aspect ratios. */
import { describe, expect, it } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { floorShearAt } from '../physics/wall-shear.ts';
import type { RectangleSolution } from './finite-differences.ts';
import { solveRectangle } from './finite-differences.ts';

describe.each([1, 2, 4, 10])(
  'a duct of %d : 1 by finite differences, 16, 32 and 64 cells across',
  (aspect) => {
    const form = ductForm(aspect, 1);
    const flow = 1 / form.resistance;
    const series: RectangleSolution = {
      flow,
      peak: (form.peakOverMean * flow) / form.areaM2,
      longMid: form.floorPeak,
      shortMid: form.sidePeak,
      longQuarter: floorShearAt(form, 1, aspect / 4),
      longMean: form.floorMean,
    };
    const grids = [16, 32, 64].map((cells) => solveRectangle(aspect, cells));
    const error = (grid: number, what: keyof RectangleSolution) => grids[grid][what] - series[what];

    it('flow, fastest velocity and local wall shear tend to the series with the second order of the mesh', () => {
      for (const what of ['flow', 'peak', 'longMid', 'shortMid', 'longQuarter'] as const) {
        const order = Math.log2(error(1, what) / error(2, what));
        expect(order, what).toBeGreaterThan(1.98);
        expect(order, what).toBeLessThan(2.02);
      }
    });

    it('and are the series to 3e-6 once extrapolated', () => {
      for (const what of ['flow', 'peak', 'longMid', 'shortMid', 'longQuarter'] as const) {
        const extrapolated = (4 * grids[2][what] - grids[1][what]) / 3;
        expect(Math.abs(extrapolated / series[what] - 1), what).toBeLessThan(3e-6);
      }
    });

    it('the mean shear tends to the series too, at order 1.7 to 1.8 for the logarithm in the corners', () => {
      const order = Math.log2(error(1, 'longMean') / error(2, 'longMean'));
      expect(order).toBeGreaterThan(1.7);
      expect(order).toBeLessThan(1.8);
      expect(Math.abs(grids[2].longMean / series.longMean - 1)).toBeLessThan(3e-3);
    });
  },
);
