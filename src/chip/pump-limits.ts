import type { PumpLimitEntry } from '../runsheet/types.ts';
import type { Run, Sourced } from './types.ts';

/** What the pump at one port can do, each limit with where it comes from. */
export interface PumpLimits {
  readonly minPressurePa: Sourced<number> | null;
  readonly maxPressurePa: Sourced<number> | null;
  readonly maxFlowM3s: Sourced<number> | null;
}

/** What pressure sources and syringe pumps for chips usually do. Usual practice, no source. */
const USUAL = { minPressurePa: -80e3, maxPressurePa: 700e3, maxFlowM3s: 10e-6 / 60 } as const;

/**
 * The limits that the run sheet gives; null where it gives none for the port.
 * @param drawnName of the port
 */
export function givenPumpLimits({ sheet }: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits | null {
  const given = drawnName === null ? undefined : sheet?.pumpLimits[drawnName];
  if (given === undefined) return null;
  const sourced = (value: number | null): Sourced<number> | null =>
    value === null ? null : { value, origin: 'run sheet' };
  return {
    minPressurePa: sourced(given.minPressurePa),
    maxPressurePa: sourced(given.maxPressurePa),
    maxFlowM3s: sourced(given.maxFlowM3s),
  };
}

/** What a found setting is held against: what the run sheet gives, else what is usual. */
export function foundPumpLimits(run: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits {
  const given = givenPumpLimits(run, drawnName);
  const usual = (value: number): Sourced<number> => ({ value, origin: 'typical value, not from your maker' });
  return {
    minPressurePa: given?.minPressurePa ?? usual(USUAL.minPressurePa),
    maxPressurePa: given?.maxPressurePa ?? usual(USUAL.maxPressurePa),
    maxFlowM3s: given?.maxFlowM3s ?? usual(USUAL.maxFlowM3s),
  };
}

/** The numbers alone. */
export function pumpLimitValues(limits: PumpLimits): Omit<PumpLimitEntry, 'line'> {
  return {
    minPressurePa: limits.minPressurePa?.value ?? null,
    maxPressurePa: limits.maxPressurePa?.value ?? null,
    maxFlowM3s: limits.maxFlowM3s?.value ?? null,
  };
}
