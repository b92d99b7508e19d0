import {
  formatBound,
  formatMm,
  formatNumber,
  formatShare,
  largestMagnitude,
  type Show,
  type Shown,
} from '../runsheet/shown.ts';
import { type Column, figures } from './columns.ts';

/** What a number of the result is to people; `result-schema.ts` gives it beside the number's description. */
export type Quantity = {
  /** What it measures: a place or size in the drawing is in mm, a share in per cent, a bound is a share rounded up. */
  readonly kind: Shown | 'drawn_mm' | 'number' | 'share' | 'bound';
  /** Its name at the head of a column. */
  readonly head: string;
  /** Second line of the head, instead of the unit. */
  readonly second?: string | undefined;
};

/** Writes a row's values by their keys, each with its unit; "–" where there is none. */
export function quantityTexts<Key extends string>(
  quantityOf: (key: Key) => Quantity,
  row: { readonly [key in Key]: number | null },
  show: Show,
): (key: Key) => string {
  return (key) => {
    const value = row[key];
    if (value === null) return '–';
    const { unit, text } = scaleOf(quantityOf(key).kind, Math.abs(value), show);
    return unit === '' ? text(value) : `${text(value)} ${unit}`;
  };
}

/** Makes columns of values that each stand with a unit of their own. */
export function valueColumns<Key extends string>(
  quantityOf: (key: Key) => Quantity,
  show: Show,
): (key: Key, head?: string) => Column<{ readonly [key in Key]: number | null }> {
  return (key, head = quantityOf(key).head) =>
    figures(head, (row) => quantityTexts(quantityOf, row, show)(key));
}

/** A column's quantity: its key, or its key with what differs in this table. */
export type Wanted<Key extends string, Row> =
  | Key
  | {
      readonly key: Key;
      readonly head?: string;
      readonly value?: (row: Row) => number | null;
      /** Left out where no row has a value. */
      readonly isOptional?: boolean;
    };

/**
 * Makes columns of numbers for a table of these rows. Those asked for together share one unit, chosen by the largest of all their
 * values; "–" stands for what does not exist.
 */
export function quantityColumns<Key extends string, Row extends { readonly [key in Key]: number | null }>(
  quantityOf: (key: Key) => Quantity,
  rows: readonly Row[],
  show: Show,
): (...wanted: readonly Wanted<Key, Row>[]) => readonly Column<Row>[] {
  return (...wanted) => {
    const asked = wanted.map((one) => {
      const { key, ...own } = typeof one === 'string' ? { key: one } : one;
      return { ...quantityOf(key), value: (row: Row): number | null => row[key], isOptional: false, ...own };
    });
    const used = asked.filter(
      ({ value, isOptional }) => !isOptional || rows.some((row) => value(row) !== null),
    );
    const largest = largestMagnitude(asked.flatMap(({ value }) => rows.map(value)));
    return used.map(({ kind, head, second, value }) => {
      const { unit, text } = scaleOf(kind, largest, show);
      return figures(
        head,
        (row) => {
          const number = value(row);
          return number === null ? '–' : text(number);
        },
        second ?? unit,
      );
    });
  };
}

function scaleOf(
  kind: Quantity['kind'],
  largest: number,
  show: Show,
): { readonly unit: string; readonly text: (value: number) => string } {
  switch (kind) {
    case 'drawn_mm':
      return { unit: 'mm', text: formatMm };
    case 'number':
      return { unit: '', text: formatNumber };
    case 'share':
      return { unit: '', text: formatShare };
    case 'bound':
      return { unit: '', text: formatBound };
    default: {
      const { text, si } = show.unit(kind, largest);
      return { unit: text, text: (value) => formatNumber(value / si) };
    }
  }
}
