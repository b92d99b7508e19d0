import type { DuctForm, ShearRange } from '../../src/physics/duct.ts';
import { shareInside } from '../../src/physics/duct-state.ts';
import { longWallProfile, shortWallProfile } from '../../src/physics/wall-profile.ts';

/** Wall shear (Pa) on the floor at y (m) from its middle, |y| ≤ width/2, at a pressure gradient (Pa/m), with its sign. */
export function floorShearAt(form: DuctForm, gradientPaM: number, yM: number): number {
  return shearAt(form, form.widthM, gradientPaM, yM);
}

/** The same on the side, at z (m) from its middle, |z| ≤ depth/2. */
export function sideShearAt(form: DuctForm, gradientPaM: number, zM: number): number {
  return shearAt(form, form.depthM, gradientPaM, zM);
}

/** τ = (4/π²) G s v(πd/s), d from the corner, s the shorter side; v of the product's wall profiles. */
function shearAt(
  { widthM, depthM }: DuctForm,
  wallM: number,
  gradientPaM: number,
  fromMiddleM: number,
): number {
  const shortSide = Math.min(widthM, depthM);
  const aspect = Math.max(widthM, depthM) / shortSide;
  const profile = wallM === shortSide && aspect > 1 ? shortWallProfile(aspect) : longWallProfile(aspect);
  const fromCornerM = wallM / 2 - Math.abs(fromMiddleM);
  return (4 / Math.PI ** 2) * gradientPaM * shortSide * profile.at((Math.PI * fromCornerM) / shortSide).value;
}

/** Share of the floor inside a range, as the product asks for it. */
export function floorShareInside(form: DuctForm, gradientPaM: number, range: ShearRange): number {
  return shareInside({ form, gradientPaM }, 'floor', range);
}

export function sideShareInside(form: DuctForm, gradientPaM: number, range: ShearRange): number {
  return shareInside({ form, gradientPaM }, 'side', range);
}
