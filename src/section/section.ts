/**
 * One straight duct without a layout: of flow, pressure drop and mean wall shear one is given and the others follow.
 * Exact for developed laminar flow; see physics/duct.ts. Beside it what parallel plates as far apart as the shorter side, and as wide as the longer, would have.
 */
import {
  type DuctState,
  ductState,
  fastestTime,
  flowForShear,
  meanTime,
  resistancePerLength,
  volumeOf,
} from '../physics/duct-state.ts';
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

export interface SectionState extends DuctState {
  /** Of the rectangle computed: for an isotropic profile the one of the same depth and area. */
  readonly ductWidthM: number;
  readonly resistance: number;
  readonly pressurePa: number;
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
  const resistance = resistancePerLength(form, input) * lengthM;
  const flowM3s = flowOf(given);
  refuse('flow that follows', flowM3s);
  const state = ductState(form, flowM3s, input);
  const gap = Math.min(ductWidthM, depthM);
  const breadth = Math.max(ductWidthM, depthM);
  return {
    ...state,
    ductWidthM,
    resistance,
    pressurePa: resistance * flowM3s,
    residenceS: meanTime(state, lengthM),
    fastestS: fastestTime(state, lengthM),
    volumeM3: volumeOf(form, lengthM),
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
        return flowForShear(form, 'floor', 'mean', quantity.shearPa, input);
      default:
        return quantity satisfies never;
    }
  }
}

function refuse(what: string, value: number): void {
  if (!(value > 0 && value < Infinity))
    throw new RangeError(`the ${what} must be above 0 and finite, not ${value}`);
}
