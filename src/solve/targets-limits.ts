import type { PumpLimitEntry } from '../runsheet/types.ts';
import type { Interval } from './targets-wanted.ts';

/** What a pump can do; null where nothing is said. */
export type PumpNumbers = Omit<PumpLimitEntry, 'line'>;

/**
 * What one setting does while the other settings stay as found: each is `at` + `slope` · (setting − found setting).
 * The setting is a pressure at the far end of the tubing (Pa) or a flow into the chip (m³/s).
 */
export interface Response {
  readonly setting: number;
  readonly observed: Line;
  readonly supplyPressurePa: Line;
  readonly flowM3s: Line;
}

export interface Line {
  readonly at: number;
  readonly slope: number;
}

export interface PumpReach {
  readonly isWithin: boolean;
  /** Settings that the pump can do; null when there is none. */
  readonly interval: Interval | null;
  /** The nearest of them to the found one; null when there is none. */
  readonly nearest: number | null;
}

/** Rounding never decides against the pump. */
const SLACK = 1e-9;

/** Whether a pump can do a setting: both the pressure at the far end of the tubing and the flow lie within what it can hold and give. */
export function pumpReach(response: Response, limits: PumpNumbers): PumpReach {
  const interval = settingsWithin(response, limits);
  const { setting } = response;
  if (interval === null) return { isWithin: false, interval, nearest: null };
  const nearest = Math.min(Math.max(setting, interval.low), interval.high);
  // Rounding is measured by the larger of the two, and where both are next to nothing by what the flow or pressure itself is.
  const isWithin = Math.abs(nearest - setting) <= SLACK * Math.max(Math.abs(nearest), Math.abs(setting));
  return { isWithin, interval, nearest };
}

/** Settings at which the pump's pressure and flow keep its limits. */
export function settingsWithin(response: Response, limits: PumpNumbers): Interval | null {
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limits;
  const byPressure = settingsFor(response, response.supplyPressurePa, {
    low: minPressurePa ?? -Infinity,
    high: maxPressurePa ?? Infinity,
  });
  const byFlow = settingsFor(response, response.flowM3s, {
    low: -(maxFlowM3s ?? Infinity),
    high: maxFlowM3s ?? Infinity,
  });
  return byPressure === null || byFlow === null ? null : intersection(byPressure, byFlow);
}

/** Settings at which a line of the response lies in an interval; null when there is none. */
export function settingsFor(
  { setting }: Pick<Response, 'setting'>,
  { at, slope }: Line,
  within: Interval,
): Interval | null {
  if (slope === 0) return at >= within.low && at <= within.high ? { low: -Infinity, high: Infinity } : null;
  const ends = [setting + (within.low - at) / slope, setting + (within.high - at) / slope];
  return slope > 0 ? { low: ends[0], high: ends[1] } : { low: ends[1], high: ends[0] };
}

export function intersection(a: Interval, b: Interval): Interval | null {
  const low = Math.max(a.low, b.low);
  const high = Math.min(a.high, b.high);
  return low <= high ? { low, high } : null;
}

/** Value of a line at another setting. */
export function lineAt({ setting }: Pick<Response, 'setting'>, { at, slope }: Line, other: number): number {
  return slope === 0 ? at : at + slope * (other - setting);
}
