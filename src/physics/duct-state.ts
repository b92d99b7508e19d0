/**
 * What one flow of one fluid does in one cross-section.
 *
 * Here alone the factors of a section meet viscosity and flow. Callers ask for the gradient, or for the flow that has a shear, and
 * never multiply a resistance themselves: with walls that give or a fluid that thins it is no constant of the section.
 */
import type { DuctFactors, DuctForm, ShearRange } from './duct.ts';
import { wallShareInside } from './duct.ts';
import { entranceLength } from './entrance.ts';
import { reynoldsNumber } from './reynolds.ts';

/** What of a fluid decides its flow. */
export interface FlowingFluid {
  readonly viscosityPaS: number;
  readonly densityKgM3: number;
}

/** Magnitudes, in SI. NaN throughout where the flow is. */
export interface DuctState {
  readonly form: DuctForm;
  readonly flowM3s: number;
  /** Pressure gradient that drives the flow, Pa/m. */
  readonly gradientPaM: number;
  readonly meanVelocity: number;
  readonly peakVelocity: number;
  /** On the hydraulic diameter. */
  readonly reynolds: number;
  readonly entranceM: number;
  readonly floorMeanPa: number;
  readonly floorPeakPa: number;
  readonly sideMeanPa: number;
  readonly sidePeakPa: number;
}

/** The floor is the wall of the width, the side that of the depth. */
export type Wall = 'floor' | 'side';

/** Over a wall, or in its middle. */
export type ShearAt = 'mean' | 'peak';

/** State of a section at a flow (m³/s), whatever its sign. */
export function ductState(form: DuctForm, flow: number, fluid: FlowingFluid): DuctState {
  const flowM3s = Math.abs(flow);
  const gradientPaM = resistancePerLength(form, fluid) * flowM3s;
  const meanVelocity = flowM3s / form.areaM2;
  const reynolds = reynoldsNumber(
    fluid.densityKgM3,
    meanVelocity,
    form.hydraulicDiameterM,
    fluid.viscosityPaS,
  );
  return {
    form,
    flowM3s,
    gradientPaM,
    meanVelocity,
    peakVelocity: meanVelocity * form.peakOverMean,
    reynolds,
    entranceM: entranceLength(reynolds, form.hydraulicDiameterM),
    floorMeanPa: form.floorMean * gradientPaM,
    floorPeakPa: form.floorPeak * gradientPaM,
    sideMeanPa: form.sideMean * gradientPaM,
    sidePeakPa: form.sidePeak * gradientPaM,
  };
}

/**
 * Resistance per length, Pa s/m³ per m.
 * @throws RangeError when the viscosity is not a positive finite number.
 */
export function resistancePerLength(
  form: Pick<DuctForm, 'resistance'>,
  { viscosityPaS }: Pick<FlowingFluid, 'viscosityPaS'>,
): number {
  if (!(viscosityPaS > 0 && viscosityPaS < Infinity)) {
    throw new RangeError(`a viscosity must be above 0 Pa s and finite, not ${viscosityPaS}`);
  }
  return viscosityPaS * form.resistance;
}

/** Flow (m³/s) at which a wall has a shear (Pa). */
export function flowForShear(
  form: DuctForm,
  wall: Wall,
  at: ShearAt,
  shearPa: number,
  { viscosityPaS }: Pick<FlowingFluid, 'viscosityPaS'>,
): number {
  return shearPa / (shearPerGradient(form, wall, at) * viscosityPaS * form.resistance);
}

/** Wall shear per pressure gradient, τ/G (m). */
export function shearPerGradient(of: DuctFactors, wall: Wall, at: ShearAt): number {
  if (wall === 'floor') return at === 'mean' ? of.floorMean : of.floorPeak;
  return at === 'mean' ? of.sideMean : of.sidePeak;
}

/** Wall shear, Pa. */
export function wallShear({ form, gradientPaM }: DuctState, wall: Wall, at: ShearAt): number {
  return shearPerGradient(form, wall, at) * gradientPaM;
}

/** Share (0 … 1) of a wall whose shear lies in the range; of an etched section's floor, of that alone. */
export function shareInside(
  { form, gradientPaM }: Pick<DuctState, 'form' | 'gradientPaM'>,
  wall: Wall,
  range: ShearRange,
): number {
  const [wallM, spanM] = wall === 'floor' ? [form.widthM, form.floorWidthM] : [form.depthM, form.depthM];
  return wallShareInside(form, wallM, spanM, gradientPaM, range);
}

/** Volume (m³) of a length (m). */
export function volumeOf({ areaM2 }: DuctForm, lengthM: number): number {
  return areaM2 * lengthM;
}

/** Mean time (s) that fluid stays in a volume (m³) at a flow (m³/s) of any sign; infinite at rest. */
export function residenceTime(volumeM3: number, flowM3s: number): number {
  return volumeM3 / Math.abs(flowM3s);
}

/** The same for a length (m) of the duct, by its mean velocity. */
export function meanTime({ meanVelocity }: DuctState, lengthM: number): number {
  return lengthM / meanVelocity;
}

/** Time (s) of the fastest fluid through a length (m). */
export function fastestTime({ peakVelocity }: DuctState, lengthM: number): number {
  return lengthM / peakVelocity;
}
