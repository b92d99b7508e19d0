import { formatNumber, type Show, type Shown } from '../runsheet/shown.ts';
import type { Window } from '../runsheet/types.ts';

/** Up to how many digits numbers are written, and the words for an open window. */
export interface WindowStyle {
  readonly digits: number;
  readonly most: string;
  readonly least: string;
}

/** "0.05 to 0.5 Pa" in one unit; "≤ 0.5 Pa" or "≥ 0.05 Pa" where an end is open. */
export function windowText(show: Show, shown: Shown, { min, max }: Window, style: WindowStyle): string {
  if (min === null) return `${style.most} ${valueText(show, shown, max, style.digits)}`;
  if (max === null) return `${style.least} ${valueText(show, shown, min, style.digits)}`;
  const { text, si } = show.unit(shown, Math.max(Math.abs(min), Math.abs(max)));
  return `${formatNumber(min / si, style.digits)} to ${formatNumber(max / si, style.digits)} ${text}`;
}

/** A value with its unit; "–" for what does not exist. */
export function valueText(show: Show, shown: Shown, value: number | null, digits: number): string {
  if (value === null || !Number.isFinite(value)) return '–';
  const { text, si } = show.unit(shown, Math.abs(value));
  return `${formatNumber(value / si, digits)} ${text}`;
}
