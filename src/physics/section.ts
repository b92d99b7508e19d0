/** Cross-sections that stand for what a process leaves behind. */
import { type DuctForm, ductForm } from './duct.ts';

export type Profile = 'rectangle' | 'isotropic';

/**
 * Shape factors of a channel of a profile, by the width and depth (m) of the duct that stands for it. An isotropic etch is
 * the duct of width mask + π·depth/2, with its floor, and the mean shear on it, as wide as the mask.
 * @throws RangeError when a side is not a positive finite number, or the isotropic width leaves no mask.
 */
export function sectionForm(profile: Profile, ductWidthM: number, depthM: number): DuctForm {
  const form = ductForm(ductWidthM, depthM);
  if (profile === 'rectangle') return form;
  const floorMean = (widthM: number, heightM: number): number =>
    isotropicFloorMean(widthM - (Math.PI * heightM) / 2, heightM);
  // d ln τ/d ln x by central differences: the error is of the order of the squared step, 1e-9. Neither step may use up a
  // mask that is far narrower than the etch is deep.
  const step = Math.min(1e-5, 0.1 * (1 - (Math.PI * depthM) / (2 * ductWidthM)));
  const slope = (more: number, less: number): number =>
    Math.log(more / less) / Math.log((1 + step) / (1 - step));
  const byWidth = slope(
    floorMean(ductWidthM * (1 + step), depthM),
    floorMean(ductWidthM * (1 - step), depthM),
  );
  const byDepth = slope(
    floorMean(ductWidthM, depthM * (1 + step)),
    floorMean(ductWidthM, depthM * (1 - step)),
  );
  return {
    ...form,
    floorWidthM: ductWidthM - (Math.PI * depthM) / 2,
    floorMean: floorMean(ductWidthM, depthM),
    byWidth: { ...form.byWidth, floorMean: byWidth },
    byDepth: { ...form.byDepth, floorMean: byDepth },
  };
}

export interface IsotropicSection {
  /** Width (m) of the rectangle of the same depth and area. */
  readonly ductWidthM: number;
  /** Distance (m) from wall to wall at the top, where the channel is widest. */
  readonly stripWidthM: number;
  readonly areaM2: number;
}

/**
 * Isotropic (wet) etch through a mask opening: the etch undercuts the mask by its depth, so the floor is as wide as the
 * mask, the sides are quarter circles of radius = depth, and the area is mask·depth + π·depth²/2.
 *
 * The rectangle of equal depth and area (and, as it happens, of equal perimeter) stands for it. Against finite differences
 * of the true section, at a given flow and for masks from half the depth upwards: resistance 0 to 4.4 % low, shear in the
 * middle of the floor 0 to 2.2 % low. The rectangle's floor is wider than the true one, which is as wide as the mask: the
 * mean over all of it is up to 21 % below the true floor's, so use `isotropicFloorMean`, which is within 1 %.
 * @throws RangeError when mask or depth is not above 0 m.
 */
export function isotropicSection(maskWidthM: number, depthM: number): IsotropicSection {
  refuseSection(maskWidthM, depthM);
  const ductWidthM = maskWidthM + (Math.PI * depthM) / 2;
  return { ductWidthM, stripWidthM: maskWidthM + 2 * depthM, areaM2: ductWidthM * depthM };
}

/**
 * Mean wall shear per pressure gradient (τ/G, m) over the true floor of an isotropic etch: the mean of the rectangle's
 * floor profile over the middle part that is as wide as the mask, |y| ≤ b = mask/2,
 * (4s/π²) Σ [1 − (s/nπb) sinh(nπb/s)/cosh(nπl/2s)]/n² over odd n, with s = depth and l the duct's width.
 * G is the gradient in the rectangle, R µ Q/(µL).
 * @throws RangeError when mask or depth is not above 0 m.
 */
export function isotropicFloorMean(maskWidthM: number, depthM: number): number {
  const { ductWidthM } = isotropicSection(maskWidthM, depthM);
  const near = (Math.PI * (ductWidthM - maskWidthM)) / (2 * depthM); // π(l/2 − b)/s = π²/4: a handful of terms
  const far = (Math.PI * (ductWidthM + maskWidthM)) / (2 * depthM);
  let sum = 0;
  for (let n = 1; n * near < 40; n += 2) {
    sum += (Math.exp(-n * near) - Math.exp(-n * far)) / ((1 + Math.exp(-n * (near + far))) * n ** 3);
  }
  const meanGap = ((2 * depthM) / (Math.PI * maskWidthM)) * sum;
  return ((4 * depthM) / Math.PI ** 2) * (Math.PI ** 2 / 8 - meanGap);
}

function refuseSection(maskWidthM: number, depthM: number): void {
  if (maskWidthM > 0 && depthM > 0 && maskWidthM < Infinity && depthM < Infinity) return;
  throw new RangeError(
    `an etched section needs a mask and a depth above 0 m, not ${maskWidthM} and ${depthM}`,
  );
}
