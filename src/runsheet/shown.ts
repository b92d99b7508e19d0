import type { ShowUnits } from './types.ts';
import { unitFactor } from './units.ts';

/** What a number on screen or paper measures. Lengths along a channel and across it have units of their own. */
export type Shown =
  | 'flow'
  | 'pressure'
  | 'wall_shear'
  | 'residence_time'
  | 'velocity'
  | 'length'
  | 'cross_length'
  | 'resistance'
  | 'volume';

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

const LADDERS: Record<Shown, { readonly usual: string; readonly units: readonly Unit[] }> = {
  flow: {
    usual: 'µL/min',
    units: [
      { text: 'pL/min', si: 1e-15 / 60 },
      { text: 'nL/min', si: 1e-12 / 60 },
      { text: 'µL/min', si: 1e-9 / 60 },
      { text: 'mL/min', si: 1e-6 / 60 },
      { text: 'L/min', si: 1e-3 / 60 },
    ],
  },
  pressure: {
    usual: 'kPa',
    units: [
      { text: 'mPa', si: 1e-3 },
      { text: 'Pa', si: 1 },
      { text: 'kPa', si: 1e3 },
      { text: 'MPa', si: 1e6 },
    ],
  },
  wall_shear: {
    usual: 'Pa',
    units: [
      { text: 'µPa', si: 1e-6 },
      { text: 'mPa', si: 1e-3 },
      { text: 'Pa', si: 1 },
      { text: 'kPa', si: 1e3 },
    ],
  },
  residence_time: {
    usual: 's',
    units: [
      { text: 'µs', si: 1e-6 },
      { text: 'ms', si: 1e-3 },
      { text: 's', si: 1 },
      { text: 'min', si: 60 },
      { text: 'h', si: 3600 },
    ],
  },
  velocity: {
    usual: 'mm/s',
    units: [
      { text: 'nm/s', si: 1e-9 },
      { text: 'µm/s', si: 1e-6 },
      { text: 'mm/s', si: 1e-3 },
      { text: 'm/s', si: 1 },
    ],
  },
  length: {
    usual: 'mm',
    units: [
      { text: 'µm', si: 1e-6 },
      { text: 'mm', si: 1e-3 },
      { text: 'm', si: 1 },
    ],
  },
  cross_length: {
    usual: 'µm',
    units: [
      { text: 'nm', si: 1e-9 },
      { text: 'µm', si: 1e-6 },
      { text: 'mm', si: 1e-3 },
      { text: 'm', si: 1 },
    ],
  },
  resistance: {
    usual: '10¹² Pa s/m³',
    units: [
      { text: 'Pa s/m³', si: 1 },
      { text: '10³ Pa s/m³', si: 1e3 },
      { text: '10⁶ Pa s/m³', si: 1e6 },
      { text: '10⁹ Pa s/m³', si: 1e9 },
      { text: '10¹² Pa s/m³', si: 1e12 },
      { text: '10¹⁵ Pa s/m³', si: 1e15 },
      { text: '10¹⁸ Pa s/m³', si: 1e18 },
      { text: '10²¹ Pa s/m³', si: 1e21 },
    ],
  },
  volume: {
    usual: 'µL',
    units: [
      { text: 'fL', si: 1e-18 },
      { text: 'pL', si: 1e-15 },
      { text: 'nL', si: 1e-12 },
      { text: 'µL', si: 1e-9 },
      { text: 'mL', si: 1e-6 },
      { text: 'L', si: 1e-3 },
    ],
  },
};

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
  const usualUnit = units.find((unit) => unit.text === usual) ?? units[0];
  const inUsual = largest / usualUnit.si;
  if (!(largest > 0) || (inUsual >= 0.01 && inUsual < 1e4 && !CLIMBING.has(shown))) return usualUnit;
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
