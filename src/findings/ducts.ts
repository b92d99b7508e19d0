import { type DuctForm, gradientOf } from '../physics/duct.ts';
import { entranceLength } from '../physics/entrance.ts';
import { reynoldsNumber } from '../physics/reynolds.ts';
import { sectionForm } from '../physics/section.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/** Form of each channel's duct, in the order of chip.channels; null where a width or depth is unknown. */
export const channelForms: (context: FindingContext) => readonly (DuctForm | null)[] = oncePerContext(
  ({ chip }) => {
    const known = new Map<string, DuctForm>();
    return chip.channels.map(({ ductWidthMm, depthMm, profile }) => {
      if (!(ductWidthMm > 0 && depthMm > 0)) return null;
      const key = `${ductWidthMm} ${depthMm} ${profile}`;
      let form = known.get(key);
      if (form === undefined) {
        form = sectionForm(profile, ductWidthMm / 1000, depthMm / 1000);
        known.set(key, form);
      }
      return form;
    });
  },
);

/** What the flow does in one reach. Magnitudes, SI. */
export interface ReachState {
  readonly form: DuctForm;
  /** Pa/m. */
  readonly gradient: number;
  readonly flowM3s: number;
  readonly meanVelocity: number;
  readonly peakVelocity: number;
  readonly reynolds: number;
  readonly entranceM: number;
}

/** State of one reach; null where its section or its flow is unknown. Cheap: made on demand. */
export function reachState(context: FindingContext, reach: number): ReachState | null {
  const { network, flow, run } = context;
  const form = channelForms(context)[network.reachChannel[reach]];
  if (flow === null || form === null) return null;
  const flowM3s = Math.abs(flow.reachFlow[reach]);
  if (Number.isNaN(flowM3s)) return null;
  const { viscosityPaS, densityKgM3 } = run.fluid;
  const meanVelocity = flowM3s / form.areaM2;
  const reynolds = reynoldsNumber(densityKgM3, meanVelocity, form.hydraulicDiameterM, viscosityPaS);
  return {
    form,
    gradient: gradientOf(form, viscosityPaS, flowM3s),
    flowM3s,
    meanVelocity,
    peakVelocity: meanVelocity * form.peakOverMean,
    reynolds,
    entranceM: entranceLength(reynolds, form.hydraulicDiameterM),
  };
}

/** Length of a reach that has room for fluid (m): the duct length without what joints add to its resistance. */
export function roomLengthM({ network }: FindingContext, reach: number): number {
  return (network.reachDuctMm[reach] - network.reachJointMm[reach]) / 1000;
}
