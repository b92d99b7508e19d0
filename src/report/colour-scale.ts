import { interpolateCividis } from 'd3-scale-chromatic';
import { formatNumber } from '../runsheet/shown.ts';

/**
 * Cividis: its lightness rises evenly, so it reads the same for colour-blind people and in grey (J. R. Nuñez, C. R. Anderton &
 * R. S. Renslow, PLoS ONE 13 (2018) e0199239). Cut into steps, so that pieces of one colour can be drawn together.
 */
export const COLOUR_STEPS = 48;

/** Hex colours from the low end (dark blue) to the high end (yellow). */
export const PALETTE: readonly string[] = Array.from({ length: COLOUR_STEPS }, (_, step) =>
  hexOf(interpolateCividis(step / (COLOUR_STEPS - 1))),
);

/** For a reach without a value, or without flow on a logarithmic scale. */
export const NO_VALUE_COLOUR = '#c8c8c8';

export interface ColourScale {
  readonly kind: 'linear' | 'log';
  /** SI values at the two ends; equal when all values are. */
  readonly low: number;
  readonly high: number;
  /** Palette step of a value, −1 for none. */
  readonly step: (value: number) => number;
  /** 0…1 along the legend. */
  readonly offset: (value: number) => number;
}

/**
 * The scale of one map. Flow, shear and times start at 0 unless they span more than two decades, where the scale is logarithmic over
 * at most twelve decades below the largest; pressures run from the lowest to the highest. null without any value.
 */
export function colourScale(values: Float64Array, from: 'zero' | 'lowest'): ColourScale | null {
  let lowest = Number.POSITIVE_INFINITY;
  let highest = Number.NEGATIVE_INFINITY;
  let lowestPositive = Number.POSITIVE_INFINITY;
  for (const value of values) {
    if (Number.isNaN(value)) continue;
    if (value < lowest) lowest = value;
    if (value > highest) highest = value;
    if (value > 0 && value < lowestPositive) lowestPositive = value;
  }
  if (lowest > highest) return null;
  const bottom = Math.max(lowestPositive, highest * 1e-12);
  if (from === 'zero' && highest > 100 * bottom) {
    const span = Math.log(highest / bottom);
    return scale('log', bottom, highest, (value) => (value < bottom ? -1 : Math.log(value / bottom) / span));
  }
  const low = from === 'zero' ? 0 : lowest;
  const span = highest - low;
  return scale('linear', low, highest, (value) => (span > 0 ? (value - low) / span : 0.5));
}

function scale(
  kind: 'linear' | 'log',
  low: number,
  high: number,
  offset: (value: number) => number,
): ColourScale {
  return {
    kind,
    low,
    high,
    offset,
    step: (value) => {
      const t = Number.isNaN(value) ? -1 : offset(value);
      return t < 0 ? -1 : Math.min(COLOUR_STEPS - 1, Math.round(t * (COLOUR_STEPS - 1)));
    },
  };
}

/** Round values along a scale for the legend, ends included, low to high. */
export function legendTicks({ kind, low, high }: ColourScale, unitSi: number, wanted = 5): readonly number[] {
  if (!(high > low)) return [low];
  if (kind === 'log') return logTicks(low, high, wanted);
  const step = niceStep((high - low) / unitSi / wanted) * unitSi;
  const ticks = [low];
  for (let k = Math.ceil(low / step); k * step < high; k++) {
    // round ticks too near to an end would sit on its number
    const inner = Math.min(k * step - low, high - k * step) > 0.45 * step;
    if (inner) ticks.push(k * step);
  }
  ticks.push(high);
  return ticks;
}

function logTicks(low: number, high: number, wanted: number): readonly number[] {
  const decades = Math.log10(high / low);
  const every = Math.max(1, Math.ceil(decades / wanted));
  const ticks = [low];
  for (let k = Math.ceil(Math.log10(low)); 10 ** k < high; k += every) {
    const value = 10 ** k;
    const gap = Math.min(Math.log10(value / low), Math.log10(high / value));
    if (gap > 0.12 * decades) ticks.push(value);
  }
  ticks.push(high);
  return ticks;
}

/** The smallest of 1, 2, 5 × 10^k that is at least `rough`. */
export function niceStep(rough: number): number {
  const power = 10 ** Math.floor(Math.log10(rough));
  const [one] = [1, 2, 5, 10].filter((factor) => factor * power >= rough * (1 - 1e-9));
  return one * power;
}

/** About five round values along an axis from `low` to `high`, with their texts; an end that rounding moves is still one of them. */
export function axisTicks(low: number, high: number): { at: number; text: string }[] {
  const step = niceStep((high - low) / 5);
  const ticks: { at: number; text: string }[] = [];
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * step; k++)
    ticks.push({ at: k * step, text: formatNumber(k * step) });
  return ticks;
}

function hexOf(rgb: string): string {
  const channels = rgb.match(/\d+/g) ?? [];
  return `#${channels.map((channel) => Number(channel).toString(16).padStart(2, '0')).join('')}`;
}
