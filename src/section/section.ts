/**
 * One straight duct without a layout: of flow, pressure drop and mean wall shear one is given and the others follow.
 * Exact for developed laminar flow; see physics/duct.ts. Beside it what parallel plates as far apart as the shorter side, and as wide as the longer, would have.
 */
import { gradientOf } from '../physics/duct.ts';
import { entranceLength } from '../physics/entrance.ts';
import { reynoldsNumber } from '../physics/reynolds.ts';
import { isotropicSection, sectionForm } from '../physics/section.ts';

export type Given =
  | { readonly kind: 'flow'; readonly flowM3s: number }
  | { readonly kind: 'pressure'; readonly pressurePa: number }
  /** Mean over the floor. */
  | { readonly kind: 'wall_shear'; readonly shearPa: number };

export interface SectionInput {
  /** As drawn: the mask's for an isotropic profile. */
  readonly widthM: number;
  readonly depthM: number;
  readonly lengthM: number;
  readonly profile: 'rectangle' | 'isotropic';
  readonly viscosityPaS: number;
  readonly densityKgM3: number;
  readonly given: Given;
}

export interface SectionState {
  /** Of the rectangle computed: for an isotropic profile the one of the same depth and area. */
  readonly ductWidthM: number;
  readonly resistance: number;
  readonly flowM3s: number;
  readonly pressurePa: number;
  readonly meanVelocity: number;
  readonly peakVelocity: number;
  readonly reynolds: number;
  readonly entranceM: number;
  readonly floorMeanPa: number;
  readonly floorPeakPa: number;
  readonly sideMeanPa: number;
  readonly sidePeakPa: number;
  readonly residenceS: number;
  readonly fastestS: number;
  readonly volumeM3: number;
  /** Parallel plates at the same flow: R = 12 µ L/(l s³), τ = 6 µ Q/(l s²). */
  readonly plates: { readonly resistance: number; readonly shearPa: number };
}

/**
 * Everything about one duct.
 * @throws RangeError when a width, depth, length, viscosity, density or the given quantity is not above 0 and finite
 */
export function computeSection(input: SectionInput): SectionState {
  const { widthM, depthM, lengthM, profile, viscosityPaS, densityKgM3, given } = input;
  refuse('width', widthM);
  refuse('depth', depthM);
  refuse('length', lengthM);
  refuse('viscosity', viscosityPaS);
  refuse('density', densityKgM3);
  const ductWidthM = profile === 'isotropic' ? isotropicSection(widthM, depthM).ductWidthM : widthM;
  const form = sectionForm(profile, ductWidthM, depthM);
  const resistance = viscosityPaS * form.resistance * lengthM;
  const flowM3s = flowOf(given);
  refuse('flow that follows', flowM3s);
  const gradient = gradientOf(form, viscosityPaS, flowM3s);
  const meanVelocity = flowM3s / form.areaM2;
  const peakVelocity = meanVelocity * form.peakOverMean;
  const reynolds = reynoldsNumber(densityKgM3, meanVelocity, form.hydraulicDiameterM, viscosityPaS);
  const gap = Math.min(ductWidthM, depthM);
  const breadth = Math.max(ductWidthM, depthM);
  return {
    ductWidthM,
    resistance,
    flowM3s,
    pressurePa: resistance * flowM3s,
    meanVelocity,
    peakVelocity,
    reynolds,
    entranceM: entranceLength(reynolds, form.hydraulicDiameterM),
    floorMeanPa: form.floorMean * gradient,
    floorPeakPa: form.floorPeak * gradient,
    sideMeanPa: form.sideMean * gradient,
    sidePeakPa: form.sidePeak * gradient,
    residenceS: lengthM / meanVelocity,
    fastestS: lengthM / peakVelocity,
    volumeM3: form.areaM2 * lengthM,
    plates: {
      resistance: (12 * viscosityPaS * lengthM) / (breadth * gap ** 3),
      shearPa: (6 * viscosityPaS * flowM3s) / (breadth * gap ** 2),
    },
  };

  function flowOf(quantity: Given): number {
    switch (quantity.kind) {
      case 'flow':
        refuse('flow', quantity.flowM3s);
        return quantity.flowM3s;
      case 'pressure':
        refuse('pressure', quantity.pressurePa);
        return quantity.pressurePa / resistance;
      case 'wall_shear':
        refuse('wall shear', quantity.shearPa);
        return quantity.shearPa / (form.floorMean * viscosityPaS * form.resistance);
      default:
        return quantity satisfies never;
    }
  }
}

function refuse(what: string, value: number): void {
  if (!(value > 0 && value < Infinity))
    throw new RangeError(`the ${what} must be above 0 and finite, not ${value}`);
}
