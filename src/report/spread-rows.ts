import { listText } from '../findings/words.ts';
import { formatNumber, formatShare, type Show, type Shown, type Unit } from '../runsheet/shown.ts';
import type { Tolerance } from '../runsheet/types.ts';
import { isKept, type OutputQuantity } from '../spread/outputs.ts';
import type { Spread, SpreadOutput } from '../spread/types.ts';
import type { Cause } from '../spread/variables.ts';
import { type Column, figures, words } from './columns.ts';
import { keptShare } from './spread-part.ts';

const QUANTITIES: Readonly<Record<OutputQuantity, { readonly text: string; readonly shown: Shown | null }>> =
  {
    flow: { text: 'flow', shown: 'flow' },
    pressure: { text: 'pressure', shown: 'pressure' },
    supply_pressure: { text: 'supply pressure', shown: 'pressure' },
    wall_shear_floor_mean: { text: 'floor shear, mean', shown: 'wall_shear' },
    wall_shear_floor_peak: { text: 'floor shear, peak', shown: 'wall_shear' },
    wall_shear_side_mean: { text: 'side shear, mean', shown: 'wall_shear' },
    wall_shear_side_peak: { text: 'side shear, peak', shown: 'wall_shear' },
    floor_share_inside_window: { text: 'floor inside window', shown: null },
    side_share_inside_window: { text: 'side inside window', shown: null },
    velocity: { text: 'mean velocity', shown: 'velocity' },
    residence_time: { text: 'residence time', shown: 'residence_time' },
    fastest_time: { text: 'fastest time', shown: 'residence_time' },
  };

/** "floor shear, mean of lane-1" */
export function outputText({ name, quantity }: Pick<SpreadOutput, 'name' | 'quantity'>): string {
  return `${QUANTITIES[quantity].text} of ${name}`;
}

export function quantityText({ quantity }: Pick<SpreadOutput, 'quantity'>): string {
  return QUANTITIES[quantity].text;
}

/** The unit in which an output is shown: one for all its numbers. */
export function outputUnit({ quantity, nominal, mean }: SpreadOutput, show: Show): Unit {
  const { shown } = QUANTITIES[quantity];
  if (shown === null) return { text: '%', si: 0.01 };
  return show.unit(shown, Math.abs(Number.isNaN(nominal) ? mean : nominal) || 0);
}

/** What tables say of an output, a column each; "–" for what does not exist. */
export function spreadColumns(spread: Spread, show: Show) {
  const number = (
    head: string,
    pick: (output: SpreadOutput) => number,
    digits?: number,
    second?: string,
  ): Column<SpreadOutput> =>
    figures(head, (output) => numberText(pick(output), outputUnit(output, show), digits), second);
  return {
    what: words<SpreadOutput>(
      'what',
      ({ name, isTarget }) => (isTarget ? `${name} (target)` : name),
      'share',
    ),
    quantity: words<SpreadOutput>('quantity', quantityText),
    unit: words<SpreadOutput>('unit', (output) => outputUnit(output, show).text),
    nominal: number('nominal', ({ nominal }) => nominal),
    mean: number('mean', ({ mean }) => mean),
    low: number('2.5 %', ({ p2_5 }) => p2_5),
    high: number('97.5 %', ({ p97_5 }) => p97_5),
    sd: number('sd', ({ sd }) => sd, 3),
    linearSd: number('sd,', ({ linearSd }) => linearSd, 3, 'first order'),
    linear: words<SpreadOutput>('linear', ({ isLinear }) => (isLinear === false ? 'no' : '')),
    asked: words<SpreadOutput>('asked', (output) => askedText(output, outputUnit(output, show))),
    kept: figures<SpreadOutput>('kept', (output) => shareText(keptShare(output, spread))),
    /** "83 % depth:lanes, 12 % width" */
    causes: words<SpreadOutput>('main causes', ({ shares }) => causesText(shares, spread.causes, 2), 'share'),
  };
}

function numberText(value: number, { si }: Unit, digits = 4): string {
  return Number.isFinite(value) ? formatNumber(value / si, digits) : '–';
}

function askedText({ min, max }: SpreadOutput, unit: Unit): string {
  if (min !== null && max !== null) return `${numberText(min, unit)} to ${numberText(max, unit)}`;
  if (max !== null) return `≤ ${numberText(max, unit)}`;
  return min === null ? '' : `≥ ${numberText(min, unit)}`;
}

/** "kept in 97.2 % of the draws", or nothing where nothing is asked. */
export function keptShareText(output: SpreadOutput, spread: Spread): string {
  const kept = keptShare(output, spread);
  return kept === null ? '' : `kept in ${shareText(kept)}`;
}

/** A share that is not all is never rounded to all; nothing for none. */
export function shareText(share: number | null): string {
  if (share === null) return '';
  if (share < 1 && share > 0.9999) return '> 99.99 %';
  if (share > 0 && share < 0.0001) return '< 0.01 %';
  return formatShare(Math.round(share * 1e4) / 1e4);
}

/** The largest causes, those of 1 % and more. */
function causesText(shares: Float64Array | null, causes: readonly Cause[], most: number): string {
  if (shares === null) return '';
  return rankedCauses(shares, causes)
    .filter(({ share }) => share >= 0.01)
    .slice(0, most)
    .map(({ cause, share }) => `${formatNumber(share * 100, 2)} % ${cause.key}`)
    .join(', ');
}

export interface RankedCause {
  readonly cause: Cause;
  readonly share: number;
}

export function rankedCauses(shares: Float64Array, causes: readonly Cause[]): readonly RankedCause[] {
  return causes
    .map((cause, i) => ({ cause, share: shares[i], i }))
    .sort((a, b) => b.share - a.share || a.i - b.i);
}

/** Mean share of variance of each cause over the numbers that a window is set for; over all that move when there are none. */
export function overallShares({ outputs, causes }: Spread): {
  readonly shares: Float64Array;
  readonly over: 'windows' | 'all';
} | null {
  const moving = outputs.filter(({ shares }) => shares !== null);
  if (moving.length === 0) return null;
  const windowed = moving.filter(({ hasWindow }) => hasWindow);
  const counted = windowed.length > 0 ? windowed : moving;
  const shares = new Float64Array(causes.length);
  for (const output of counted) {
    output.shares?.forEach((share, cause) => {
      shares[cause] += share / counted.length;
    });
  }
  return { shares, over: windowed.length > 0 ? 'windows' : 'all' };
}

/** "5 % (2σ)", "2 µm (hard limit)" */
export function toleranceText({ key, tolerance }: Cause, show: Show): string {
  const { distribution } = tolerance;
  return `±${sizeText(key, tolerance, show)} (${distribution === 'normal' ? '2σ' : 'hard limit'})`;
}

function sizeText(key: string, { kind, value }: Tolerance, show: Show): string {
  if (kind === 'relative') return formatShare(value);
  const [what] = key.split(':');
  switch (what) {
    case 'temperature':
      return `${formatNumber(value)} K`;
    case 'viscosity':
      return `${formatNumber(value * 1000)} mPa s`;
    case 'pressure':
      return show.text('pressure', value);
    case 'flow':
      return show.text('flow', value);
    default:
      return show.text('cross_length', value);
  }
}

/** "all windows and limits hold in 97.2 % of the draws (95 % interval 96.8 % to 97.5 %)" */
export function yieldText({ yield: chance, unknownWindows, draws }: Spread): string {
  if (unknownWindows.length > 0)
    return `nobody can say in how many draws all windows hold: the ${listText(unknownWindows, LISTED)} can not be known`;
  if (chance === null) return draws === 0 ? 'no draw was made, so nothing is said of the yield' : '';
  return `all windows and limits hold in ${shareText(chance.share)} of the draws (95 % interval ${shareText(chance.low)} to ${shareText(chance.high)})`;
}

/** What else must be said of the sample, one sentence each. */
export function remarks(spread: Spread): readonly string[] {
  const { draws, asked, outside, turbulent, idle, leftOut, unknownLimits, outputs, evenGroups } = spread;
  const texts: string[] = [];
  if (draws < asked)
    texts.push(
      `stopped before the end: ${draws} of ${asked} draws were made, and everything here is of those`,
    );
  if (outside > 0) {
    texts.push(
      `${outside} of the draws could not be computed (a duct, bore or viscosity at or below 0, or a temperature that no data cover); they count as not holding, and are in no mean or quantile`,
    );
  }
  for (const { key, most, failures } of evenGroups) {
    if (failures > 0)
      texts.push(
        `in ${shareText(failures / draws)} of the draws the flows of ${key} are not within ±${formatShare(most)} of their mean`,
      );
  }
  if (turbulent > 0) texts.push(`in ${turbulent} of the draws some reach was not laminar`);
  const bent = outputs.filter(({ isLinear }) => isLinear === false);
  if (bent.length > 0) {
    texts.push(
      `the response is not linear there, go by the sample: ${listText(bent.map(outputText), LISTED)}`,
    );
  }
  const missed = outputs.filter(
    (output) => output.isTarget && output.hasWindow && !isKept(output, output.nominal),
  );
  if (missed.length > 0) {
    texts.push(
      `at the settings of the run sheet the target is missed by the ${listText(missed.map(outputText), LISTED)}; the command pump finds settings that meet it`,
    );
  }
  for (const text of idle) texts.push(`moves nothing: ${text}`);
  if (unknownLimits.length > 0) texts.push(`not judged: ${listText(unknownLimits, LISTED)}`);
  if (leftOut > 0)
    texts.push(
      `${leftOut} more numbers are not listed for want of room; their windows were judged all the same`,
    );
  return texts;
}

/** "worst corner: floor shear, peak of lane-1 has the least room (2.1 standard deviations): 0.31 Pa there, at most 0.4 Pa asked, with depth:lanes lower, width upper" */
export function cornerText({ corner, outputs, causes }: Spread, show: Show): string | null {
  if (corner === null) return null;
  const output = outputs[corner.output];
  const unit = outputUnit(output, show);
  const text = (value: number): string => `${formatNumber(value / unit.si)} ${unit.text}`;
  const ends = causes.map(({ key }, i) => `${key} ${CORNER_END[corner.signs[i] + 1]}`).join(', ');
  const value = Number.isFinite(corner.value)
    ? `is ${text(corner.value)} there (${corner.isKept ? 'kept' : 'not kept'})`
    : 'can not be computed there';
  return `${outputText(output)} has the least room: ${formatNumber(corner.room, 3)} standard deviations to its ${corner.side === 'min' ? 'least' : 'most'} of ${text(corner.limit)}; at the worst corner of all tolerances (${ends}) it ${value}`;
}

const CORNER_END = ['lower', 'each at its worse end', 'upper'] as const;

const LISTED = 4;

/** Whether anything moves a number. */
export function moves({ sd, linearSd }: SpreadOutput): boolean {
  return sd > 0 || linearSd > 0;
}
