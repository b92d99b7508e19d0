import type { ShowUnits } from './types.ts';
import { unitFactor } from './units.ts';

export interface Unit {
  readonly text: string;
  /** SI value of one of this unit. */
  readonly si: number;
}

/** How numbers are shown to people: fixed units where the run sheet's `show` names them, else the usual unit with a fitting prefix. */
export interface Show {
  /** The unit for values of which the largest magnitude is `largest` (SI): one for a whole table column. */
  readonly unit: (shown: Shown, largest: number) => Unit;
  /** One value with its unit, at most 4 significant digits; "–" for null. */
  readonly text: (shown: Shown, value: number | null) => string;
}

const LADDERS = {
  flow: ladder('µL/min', {
    'pL/min': 1e-15 / 60,
    'nL/min': 1e-12 / 60,
    'µL/min': 1e-9 / 60,
    'mL/min': 1e-6 / 60,
    'L/min': 1e-3 / 60,
  }),
  pressure: ladder('kPa', { mPa: 1e-3, Pa: 1, kPa: 1e3, MPa: 1e6 }),
  wall_shear: ladder('Pa', { µPa: 1e-6, mPa: 1e-3, Pa: 1, kPa: 1e3 }),
  residence_time: ladder('s', { µs: 1e-6, ms: 1e-3, s: 1, min: 60, h: 3600 }),
  velocity: ladder('mm/s', { 'nm/s': 1e-9, 'µm/s': 1e-6, 'mm/s': 1e-3, 'm/s': 1 }),
  length: ladder('mm', { µm: 1e-6, mm: 1e-3, m: 1 }),
  cross_length: ladder('µm', { nm: 1e-9, µm: 1e-6, mm: 1e-3, m: 1 }),
  resistance: ladder('10¹² Pa s/m³', {
    'Pa s/m³': 1,
    '10³ Pa s/m³': 1e3,
    '10⁶ Pa s/m³': 1e6,
    '10⁹ Pa s/m³': 1e9,
    '10¹² Pa s/m³': 1e12,
    '10¹⁵ Pa s/m³': 1e15,
    '10¹⁸ Pa s/m³': 1e18,
    '10²¹ Pa s/m³': 1e21,
  }),
  volume: ladder('µL', { fL: 1e-18, pL: 1e-15, nL: 1e-12, µL: 1e-9, mL: 1e-6, L: 1e-3 }),
};

/** What a number on screen or paper measures. Lengths along a channel and across it have units of their own. */
export type Shown = keyof typeof LADDERS;

/** A quantity's units from the smallest up, by their SI values. */
interface Ladder {
  readonly usual: Unit;
  readonly units: readonly Unit[];
}

function ladder<Units extends Readonly<Record<string, number>>>(
  usual: keyof Units & string,
  units: Units,
): Ladder {
  return {
    usual: { text: usual, si: units[usual] },
    units: Object.entries(units).map(([text, si]) => ({ text, si })),
  };
}

/** Settles the units of a run sheet's `show` (or none) into a Show. */
export function showOf(show: ShowUnits | null): Show {
  const fixed = new Map<Shown, Unit>();
  for (const [quantity, text] of Object.entries(show ?? {})) {
    if (text === null) continue;
    // the keys of ShowUnits are all members of Shown
    const shown = quantity as keyof ShowUnits;
    fixed.set(shown, {
      text: prettyUnit(text),
      si: unitFactor(text, shown === 'residence_time' ? 'time' : shown),
    });
  }
  const unit = (shown: Shown, largest: number): Unit => fixed.get(shown) ?? fittingUnit(shown, largest);
  return {
    unit,
    text: (shown, value) => {
      if (value === null) return '–';
      const { text, si } = unit(shown, Math.abs(value));
      return `${formatNumber(value / si)} ${text}`;
    },
  };
}

/** Quantities whose unit always follows the value. */
const CLIMBING: ReadonlySet<Shown> = new Set(['residence_time', 'resistance']);

/** The usual unit while the value reads well in it (0.01 to 10 000), else the largest unit that the value reaches. */
function fittingUnit(shown: Shown, largest: number): Unit {
  const { usual, units } = LADDERS[shown];
  const inUsual = largest / usual.si;
  if (!(largest > 0) || (inUsual >= 0.01 && inUsual < 1e4 && !CLIMBING.has(shown))) return usual;
  // times go up to the next unit as soon as they reach two of it: 119 s, but 2 min
  const reach = shown === 'residence_time' ? 2 : 1;
  let best = units[0];
  for (const unit of units) if (largest >= unit.si * (unit.si > 1 ? reach : 1)) best = unit;
  return best;
}

/** Units as a person writes them: µ for u, · left as written, superscripts for powers. */
function prettyUnit(text: string): string {
  return text
    .trim()
    .replace(/\^?2\b/g, '²')
    .replace(/\^?3\b/g, '³')
    .replace(/^u(?=[A-Za-z])/, 'µ');
}

/**
 * At most `digits` significant digits, no trailing zeros, no −0; powers of ten below 1e-4 and from 1e6 ("1.2e-7").
 * A number that rounds to nothing but is not nothing keeps its exponent.
 */
export function formatNumber(value: number, digits = 4): string {
  if (!Number.isFinite(value)) throw new RangeError(`a number to show is ${value}`);
  if (value === 0) return '0';
  const rounded = Number(value.toPrecision(digits));
  const magnitude = Math.abs(rounded);
  if (magnitude < 1e-4 || magnitude >= 1e6) return rounded.toExponential().replace('e+', 'e');
  const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(magnitude)));
  const text = rounded.toFixed(decimals);
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}

/** A share as per cent: "12.5 %". */
export function formatShare(share: number | null): string {
  return share === null ? '–' : `${formatNumber(share * 100)} %`;
}

/** A share that bounds something, as per cent: two digits, rounded up so that it still bounds. */
export function formatBound(share: number | null): string {
  if (share === null || share === 0) return formatShare(share);
  const percent = Math.abs(share) * 100;
  const step = 10 ** (Math.floor(Math.log10(percent)) - 1);
  return `${formatNumber(Math.ceil(percent / step - 1e-9) * step, 2)} %`;
}

/** Millimetres in the drawing, to 0.001 mm. */
export function formatMm(mm: number): string {
  const text = mm.toFixed(3).replace(/\.?0+$/, '');
  return text === '-0' ? '0' : text;
}

/** Largest finite magnitude among values, 0 when there is none. */
export function largestMagnitude(values: Iterable<number | null>): number {
  let largest = 0;
  for (const value of values) if (value !== null && Math.abs(value) > largest) largest = Math.abs(value);
  return largest;
}

/** A measured value or limit of a finding, in the SI unit it carries, as text for people. */
export function measureText(show: Show, value: number | null, unit: string | null, rule: string): string {
  if (value === null) return '–';
  switch (unit) {
    case 'm':
      return show.text(Math.abs(value) < 1e-3 ? 'cross_length' : 'length', value);
    case 'Pa':
      return show.text(rule === 'shear-window' ? 'wall_shear' : 'pressure', value);
    case 's':
      return show.text('residence_time', value);
    case 'm³/s':
      return show.text('flow', value);
    case 'm/s':
      return show.text('velocity', value);
    case 'rad':
      return `${formatNumber((value * 180) / Math.PI)}°`;
    case '':
    case null:
      return formatNumber(value);
    default:
      return `${formatNumber(value)} ${unit}`;
  }
}
