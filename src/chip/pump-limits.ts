import type { PumpLimitEntry } from '../runsheet/types.ts';
import { choose } from './limits.ts';
import type { Run, Sourced } from './types.ts';

/** What the pump at one port can do, each limit with where it comes from. */
export interface PumpLimits {
  readonly minPressurePa: Sourced<number> | null;
  readonly maxPressurePa: Sourced<number> | null;
  readonly maxFlowM3s: Sourced<number> | null;
}

/** What pressure sources and syringe pumps for chips usually do. Usual practice, no source. */
const USUAL = { minPressurePa: -80e3, maxPressurePa: 700e3, maxFlowM3s: 10e-6 / 60 } as const;

/** What the run sheet says of the pump at the port of that drawn name; null where it says nothing. */
export function pumpEntryOf({ sheet }: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimitEntry | null {
  return (drawnName === null ? undefined : sheet?.pumpLimits[drawnName]) ?? null;
}

/** The limits that the run sheet gives; null where it gives none for the port. */
export function givenPumpLimits(run: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits | null {
  const given = pumpEntryOf(run, drawnName);
  return given === null ? null : limitsOf(given, {});
}

/** What a found setting is held against: what the run sheet gives, else what is usual. */
export function foundPumpLimits(run: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits {
  return limitsOf(pumpEntryOf(run, drawnName) ?? {}, USUAL);
}

function limitsOf(given: Partial<PumpLimitEntry>, usual: Partial<typeof USUAL>): PumpLimits {
  return {
    minPressurePa: choose(given.minPressurePa, usual.minPressurePa),
    maxPressurePa: choose(given.maxPressurePa, usual.maxPressurePa),
    maxFlowM3s: choose(given.maxFlowM3s, usual.maxFlowM3s),
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
