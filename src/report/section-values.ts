import { deanNumber } from '../physics/dean.ts';
import { type DuctForm, floorShareInside, gradientOf, type ShearRange } from '../physics/duct.ts';
import { entranceLength } from '../physics/entrance.ts';
import { reynoldsNumber } from '../physics/reynolds.ts';
import { type Profile, sectionForm } from '../physics/section.ts';

/** What one flow does in one cross-section. NaN where the section or the flow is unknown. */
export interface DuctState {
  readonly meanVelocity: number;
  readonly peakVelocity: number;
  readonly reynolds: number;
  readonly entranceLengthM: number;
  readonly floorMeanPa: number;
  readonly floorPeakPa: number;
  readonly sideMeanPa: number;
  readonly sidePeakPa: number;
}

/** One cross-section; everything that does not depend on the flow is computed once. */
export interface Section {
  /** NaN when a width or depth is unknown. */
  readonly areaM2: number;
  /** Mean floor shear at a flow (m³/s) of a fluid of viscosity (Pa s). */
  readonly floorMeanPa: (flowM3s: number, viscosityPaS: number) => number;
  readonly floorPeakPa: (flowM3s: number, viscosityPaS: number) => number;
  /** Magnitudes at a flow, whatever its sign. */
  readonly at: (
    flowM3s: number,
    fluid: { readonly viscosityPaS: number; readonly densityKgM3: number },
  ) => DuctState;
  /** Dean number at a bend radius. */
  readonly dean: (reynolds: number, bendRadiusM: number) => number;
  /** Share of the floor's width whose shear lies in the range. */
  readonly floorShareInside: (flowM3s: number, viscosityPaS: number, range: ShearRange) => number;
}

/** Sections by profile, width and depth, each computed at its first use: a chip has thousands of reaches and a handful of sections. */
export function sectionCache(): (profile: Profile, widthM: number, depthM: number) => Section {
  const caches = { rectangle: new Map(), isotropic: new Map() } as Record<
    Profile,
    Map<number, Map<number, Section>>
  >; // both empty
  return (profile, widthM, depthM) => {
    const byWidth = caches[profile];
    let byDepth = byWidth.get(widthM);
    if (byDepth === undefined) {
      byDepth = new Map();
      byWidth.set(widthM, byDepth);
    }
    let section = byDepth.get(depthM);
    if (section === undefined) {
      section = widthM > 0 && depthM > 0 ? sectionOf(sectionForm(profile, widthM, depthM)) : UNKNOWN_SECTION;
      byDepth.set(depthM, section);
    }
    return section;
  };
}

function sectionOf(form: DuctForm): Section {
  const gradient = (flowM3s: number, viscosityPaS: number): number =>
    gradientOf(form, viscosityPaS, Math.abs(flowM3s));
  return {
    areaM2: form.areaM2,
    floorMeanPa: (flowM3s, viscosityPaS) => form.floorMean * gradient(flowM3s, viscosityPaS),
    floorPeakPa: (flowM3s, viscosityPaS) => form.floorPeak * gradient(flowM3s, viscosityPaS),
    at: (flowM3s, { viscosityPaS, densityKgM3 }) => {
      const meanVelocity = Math.abs(flowM3s) / form.areaM2;
      const reynolds = reynoldsNumber(densityKgM3, meanVelocity, form.hydraulicDiameterM, viscosityPaS);
      const g = gradient(flowM3s, viscosityPaS);
      return {
        meanVelocity,
        peakVelocity: meanVelocity * form.peakOverMean,
        reynolds,
        entranceLengthM: entranceLength(reynolds, form.hydraulicDiameterM),
        floorMeanPa: form.floorMean * g,
        floorPeakPa: form.floorPeak * g,
        sideMeanPa: form.sideMean * g,
        sidePeakPa: form.sidePeak * g,
      };
    },
    dean: (reynolds, bendRadiusM) => deanNumber(reynolds, form.hydraulicDiameterM, bendRadiusM),
    floorShareInside: (flowM3s, viscosityPaS, range) => {
      const g = gradient(flowM3s, viscosityPaS);
      return Number.isNaN(g) ? Number.NaN : floorShareInside(form, g, range);
    },
  };
}

const { NaN: none } = Number;
const UNKNOWN_STATE: DuctState = {
  meanVelocity: none,
  peakVelocity: none,
  reynolds: none,
  entranceLengthM: none,
  floorMeanPa: none,
  floorPeakPa: none,
  sideMeanPa: none,
  sidePeakPa: none,
};
const UNKNOWN_SECTION: Section = {
  areaM2: none,
  floorMeanPa: () => none,
  floorPeakPa: () => none,
  at: () => UNKNOWN_STATE,
  dean: () => none,
  floorShareInside: () => none,
};
