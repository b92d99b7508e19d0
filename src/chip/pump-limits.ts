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

/**
 * The limits that the run sheet gives; null where it gives none for the port.
 * @param drawnName of the port
 */
export function givenPumpLimits({ sheet }: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits | null {
  const given = drawnName === null ? undefined : sheet?.pumpLimits[drawnName];
  return given === undefined ? null : limitsOf(given, {});
}

/** What a found setting is held against: what the run sheet gives, else what is usual. */
export function foundPumpLimits({ sheet }: Pick<Run, 'sheet'>, drawnName: string | null): PumpLimits {
  return limitsOf((drawnName === null ? undefined : sheet?.pumpLimits[drawnName]) ?? {}, USUAL);
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
