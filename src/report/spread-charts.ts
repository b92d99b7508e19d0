import { formatNumber, type Show } from '../runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../spread/types.ts';
import { axisTicks } from './colour-scale.ts';
import { joined } from './plain-text.ts';
import { keptShareText, outputText, outputUnit, quantityText } from './spread-rows.ts';

/** A distribution as a picture in data: numbers in the shown unit along the axis, heights as shares of the tallest bar or curve. */
export interface DistributionChart {
  readonly title: string;
  readonly subtitle: string;
  readonly unit: string;
  readonly low: number;
  readonly high: number;
  readonly ticks: readonly { readonly at: number; readonly text: string }[];
  /** Heights of bars of equal width from low to high. */
  readonly bars: Float64Array;
  /** Heights of the first-order normal curve at equal steps from low to high; empty where there is none. */
  readonly curve: Float64Array;
  readonly nominal: number;
  /** What is asked; an open end is null. */
  readonly window: { readonly min: number | null; readonly max: number | null };
  readonly alt: string;
}

const BARS = 36;
const CURVE_STEPS = 72;
/** The window is drawn in when it lies within this many widths of the sample. */
const NEAR = 1.5;

/** The distribution of one output with what is asked of it; null when there is nothing to draw (no draws, or nothing moves). */
export function distributionChart(
  output: SpreadOutput,
  spread: Spread,
  show: Show,
): DistributionChart | null {
  const values = output.column.filter(Number.isFinite).sort();
  if (values.length < 2 || !(values[values.length - 1] > values[0]) || !(output.sd > 0)) return null;
  const unit = outputUnit(output, show);
  const inUnit = (value: number | null): number | null => (value === null ? null : value / unit.si);
  const { low, high } = rangeOf(values, output);
  const bars = new Float64Array(BARS);
  for (const value of values) {
    const bar = Math.floor(((value - low) / (high - low)) * BARS);
    if (bar >= 0 && bar < BARS) bars[bar]++;
  }
  const curve = normalCurve(output, low, high, values.length * ((high - low) / BARS));
  const tallest = Math.max(...bars, ...curve);
  const kept = keptShareText(output, spread);
  const title = outputText(output);
  return {
    title: output.name,
    subtitle: joined([quantityText(output), kept], ', '),
    unit: unit.text,
    low: low / unit.si,
    high: high / unit.si,
    ticks: axisTicks(low / unit.si, high / unit.si),
    bars: bars.map((count) => count / tallest),
    curve: curve.map((height) => height / tallest),
    nominal: output.nominal / unit.si,
    window: { min: inUnit(output.min), max: inUnit(output.max) },
    alt: `Distribution of ${title} in ${unit.text}: 95 % between ${formatNumber(output.p2_5 / unit.si)} and ${formatNumber(output.p97_5 / unit.si)}${kept === '' ? '' : `; ${kept}`}.`,
  };
}

/** All but the last few draws on either side, and a window that is near. */
function rangeOf(
  sorted: Float64Array,
  { min, max }: SpreadOutput,
): { readonly low: number; readonly high: number } {
  const at = (share: number): number => sorted[Math.round(share * (sorted.length - 1))];
  let [low, high] = [at(0.001), at(0.999)];
  if (!(high > low)) [low, high] = [sorted[0], sorted[sorted.length - 1]];
  const width = high - low;
  for (const limit of [min, max]) {
    if (limit === null) continue;
    if (limit < low && low - limit < NEAR * width) low = limit;
    if (limit > high && limit - high < NEAR * width) high = limit;
  }
  const margin = 0.04 * (high - low);
  return { low: low - margin, high: high + margin };
}

function normalCurve(
  { nominal, linearSd }: SpreadOutput,
  low: number,
  high: number,
  area: number,
): Float64Array {
  if (!(linearSd > 0)) return new Float64Array(0);
  const peak = area / (linearSd * Math.sqrt(2 * Math.PI));
  return Float64Array.from({ length: CURVE_STEPS + 1 }, (_, i) => {
    const z = (low + ((high - low) * i) / CURVE_STEPS - nominal) / linearSd;
    return peak * Math.exp((-z * z) / 2);
  });
}
