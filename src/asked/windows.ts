import type { ShearRange } from '../physics/duct.ts';
import type { ShearAt, Wall } from '../physics/duct-state.ts';
import type { ChannelEntry } from '../runsheet/types.ts';

/** A number of a channel that a window speaks of: at each of its reaches, a time along each of its passages. */
export type WindowNumber =
  /** On each wall asked. */
  | { readonly kind: 'shear'; readonly at: ShearAt }
  | { readonly kind: 'share inside'; readonly range: ShearRange }
  | { readonly kind: 'time'; readonly at: 'mean' | 'fastest' }
  /** Its size, whatever its direction. */
  | { readonly kind: 'flow' };

/** One thing that a channel's windows ask: a number to be at least, or at most, so much (SI). */
export interface WindowAsk {
  readonly rule: 'shear-window' | 'residence-window' | 'flow-window';
  readonly of: WindowNumber;
  readonly side: 'least' | 'most';
  readonly limit: number;
}

/**
 * All that a channel's windows ask. Of a shear the mean must reach the least and the peak must not pass the most, or with `over` a
 * share of the wall must lie between them; of a time the fastest fluid must take the least, and the mean not pass the most.
 */
export function asksOf({ wallShear, residenceTime, flow }: ChannelEntry): readonly WindowAsk[] {
  const asks: WindowAsk[] = [];
  const add = (
    rule: WindowAsk['rule'],
    of: WindowNumber,
    side: WindowAsk['side'],
    limit: number | null | undefined,
  ): void => {
    if (limit !== null && limit !== undefined) asks.push({ rule, of, side, limit });
  };
  if (wallShear !== null && wallShear.over !== null) {
    const range = { minPa: wallShear.min, maxPa: wallShear.max };
    add('shear-window', { kind: 'share inside', range }, 'least', wallShear.over);
  } else {
    add('shear-window', { kind: 'shear', at: 'mean' }, 'least', wallShear?.min);
    add('shear-window', { kind: 'shear', at: 'peak' }, 'most', wallShear?.max);
  }
  add('residence-window', { kind: 'time', at: 'fastest' }, 'least', residenceTime?.min);
  add('residence-window', { kind: 'time', at: 'mean' }, 'most', residenceTime?.max);
  add('flow-window', { kind: 'flow' }, 'least', flow?.min);
  add('flow-window', { kind: 'flow' }, 'most', flow?.max);
  return asks;
}

/** Whether a window is asked of a channel. */
export function hasWindow(settings: ChannelEntry | null): settings is ChannelEntry {
  return (
    settings !== null &&
    (settings.wallShear !== null || settings.residenceTime !== null || settings.flow !== null)
  );
}

/** The walls of a channel on which its shear window is asked. */
export function wallsOf({ walls }: Pick<ChannelEntry, 'walls'>): readonly Wall[] {
  return walls === 'all' ? ['floor', 'side'] : ['floor'];
}
