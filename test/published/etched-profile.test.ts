/**
 * The rectangle that stands for an isotropic etch against finite differences of its true section: flat floor as wide as the
 * mask, quarter-circle sides of radius = depth. Measured at a given flow (rectangle over true section − 1):
 *
 *   mask/depth             0.5      1      2      4      8      16
 *   resistance          −4.3 % −3.3 % −2.2 % −1.3 % −0.7 % −0.4 %
 *   mid-floor shear     −1.2 % −2.2 % −2.0 % −1.3 % −0.7 % −0.4 %
 *   mean over the floor +0.2 % −0.8 % −1.0 % −0.7 % −0.4 % −0.2 %   (isotropicFloorMean)
 *   mean over all the rectangle's floor against it: −21 % −18 % −14 % −9 % −6 % −3 %
 */
import { describe, expect, it } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { isotropicFloorMean, isotropicSection } from '../../src/physics/section.ts';
import type { EtchedSolution } from './finite-differences.ts';
import { solveEtched } from './finite-differences.ts';

it('the finite differences give f Re 15.767 for a half disc (Shah & London 1978, from memory), at second order', () => {
  const grids = [16, 32, 64].map((cells) => solveEtched(0, cells).flow);
  expect(Math.log2((grids[0] - grids[1]) / (grids[1] - grids[2]))).toBeGreaterThan(1.8);
  const flow = (4 * grids[2] - grids[1]) / 3;
  const area = Math.PI / 2;
  const hydraulicDiameter = (4 * area) / (Math.PI + 2);
  expect(Math.abs((area * hydraulicDiameter ** 2) / (2 * flow) - 15.767)).toBeLessThan(0.01);
});

describe.each([
  [0.5, -0.0432, -0.0117, 0.0015],
  [1, -0.0327, -0.0217, -0.0084],
  [2, -0.0217, -0.0197, -0.0095],
  [4, -0.0129, -0.0128, -0.0068],
  [8, -0.0071, -0.0071, -0.0041],
  [16, -0.0038, -0.0038, -0.0023],
])('an isotropic etch, mask %d depths wide', (mask, ofResistance, ofMiddle, ofMean) => {
  const [coarse, fine] = [solveEtched(mask, 16), solveEtched(mask, 32)];
  const extrapolated = (what: keyof EtchedSolution) => (4 * fine[what] - coarse[what]) / 3;
  const form = ductForm(isotropicSection(mask, 1).ductWidthM, 1);
  const truth = extrapolated('flow');

  it('has the resistance of the rectangle of equal depth and area within 5 %', () => {
    const error = form.resistance * truth - 1;
    expect(Math.abs(error)).toBeLessThan(0.05);
    expect(error).toBeCloseTo(ofResistance, 3);
  });

  it('has its floor shear within 3 % at a given flow: in the middle, and on average over the floor that is there', () => {
    const middle = (form.floorPeak * form.resistance * truth) / extrapolated('floorMid') - 1;
    expect(Math.abs(middle)).toBeLessThan(0.03);
    expect(middle).toBeCloseTo(ofMiddle, 3);
    const mean = (isotropicFloorMean(mask, 1) * form.resistance * truth) / extrapolated('floorMean') - 1;
    expect(Math.abs(mean)).toBeLessThan(0.03);
    expect(mean).toBeCloseTo(ofMean, 3);
  });
});
