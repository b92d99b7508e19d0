import { NUMBER, toNumber } from './numbers.ts';
import { quoted, ValueError } from './value-error.ts';

export interface Length {
  readonly value: number;
  /** Lower case; '' for a plain number. */
  readonly unit: LengthUnit;
}

export type LengthUnit = '' | 'px' | 'mm' | 'cm' | 'q' | 'in' | 'pt' | 'pc' | 'em' | 'rem' | '%';

/** CSS Values 4, 6.2: the CSS pixel is 1/96 inch. */
export const PX_MM = 25.4 / 96;

/** Millimetres per physical unit (CSS Values 4, 6.2), to be exact for drawings whose units are millimetres. */
export const PHYSICAL_UNIT_MM: Readonly<Partial<Record<LengthUnit, number>>> = {
  mm: 1,
  cm: 10,
  q: 0.25,
  in: 25.4,
  pt: 25.4 / 72,
  pc: 25.4 / 6,
};

const LENGTH = new RegExp(`^(${NUMBER})(px|mm|cm|q|in|pt|pc|r?em|%)?$`, 'i');

/**
 * `12`, `1.5e1mm`, `30%` → number and unit.
 * @throws ValueError for anything else, also for numbers too large for a double.
 */
export function parseLength(text: string): Length {
  const match = LENGTH.exec(text.trim());
  const value = match === null ? Number.NaN : toNumber(match[1]);
  if (match === null || Number.isNaN(value)) {
    throw new ValueError(
      `${quoted(text)} is no length; write a number, or one with mm, cm, in, pt, pc, px, Q or %`,
    );
  }
  // The pattern admits only the units of LengthUnit.
  return { value, unit: (match[2] ?? '').toLowerCase() as LengthUnit };
}

/** The text of a length, trimmed; null where it is not given or `auto`. */
export function givenLength(text: string | undefined): string | null {
  const written = text?.trim() ?? '';
  return written === '' || written.toLowerCase() === 'auto' ? null : written;
}

/**
 * The length of an attribute or property in user units.
 * @throws ValueError that names it.
 */
export function readLength(name: string, text: string, whole: number | null): number {
  try {
    return toUserUnits(parseLength(text), whole);
  } catch (cause) {
    if (!(cause instanceof ValueError)) throw cause;
    throw new ValueError(`${name}: ${cause.message}`, { cause });
  }
}

/**
 * A length in user units (CSS pixels of the element's own coordinates).
 * @param whole what 100 % stands for; null when the drawing does not say.
 * @throws ValueError when a percentage has nothing to refer to, and for a length that depends on a font.
 */
export function toUserUnits(length: Length, whole: number | null): number {
  const { value, unit } = length;
  if (unit === '' || unit === 'px') return value;
  if (unit === 'em' || unit === 'rem') {
    throw new ValueError(`${value}${unit} depends on a font; write it in px, mm or user units`);
  }
  if (unit === '%') {
    if (whole === null)
      throw new ValueError(`${value}% of a drawing that states no size; give the svg a viewBox`);
    return (value / 100) * whole;
  }
  return (value * (PHYSICAL_UNIT_MM[unit] ?? Number.NaN)) / PX_MM;
}

/**
 * Millimetres of a length on the outermost svg; null for a percentage.
 * @throws ValueError for a length that depends on a font.
 */
export function toMillimetres(length: Length): number | null {
  if (length.unit === '%') return null;
  const physical = PHYSICAL_UNIT_MM[length.unit];
  return physical !== undefined ? length.value * physical : toUserUnits(length, null) * PX_MM;
}
