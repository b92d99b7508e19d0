import { inChunks } from './chunks.ts';
import type { ReachRow, SegmentRow } from './result-rows.ts';
import { reachColumns, segmentColumns } from './result-schema.ts';

/**
 * CSV after RFC 4180 (CRLF, quotes doubled) in chunks; the first line holds the JSON keys, units included. Numbers are SI and shortest
 * round-trip; null is an empty cell. A text cell that a spreadsheet would run as a formula starts with an apostrophe instead.
 */
export function writeReachesCsv(reaches: Iterable<ReachRow>): Generator<string> {
  return table(reachColumns, reaches);
}

/** As `writeReachesCsv`, for segments. */
export function writeSegmentsCsv(segments: Iterable<SegmentRow>): Generator<string> {
  return table(segmentColumns, segments);
}

/** CSV with the given columns, for any rows of texts, numbers and null. */
export function table<Key extends string>(
  columns: readonly Key[],
  rows: Iterable<{ readonly [key in Key]: string | number | null }>,
): Generator<string> {
  return inChunks(tableLines(columns, rows));
}

function* tableLines<Key extends string>(
  columns: readonly Key[],
  rows: Iterable<{ readonly [key in Key]: string | number | null }>,
): Generator<string> {
  yield `${columns.map(textCell).join(',')}\r\n`;
  for (const row of rows) yield `${columns.map((column) => cell(row[column], column)).join(',')}\r\n`;
}

function cell(value: string | number | null, column: string): string {
  if (value === null) return '';
  if (typeof value === 'string') return textCell(value);
  if (!Number.isFinite(value))
    throw new RangeError(`${column} is ${value}: a result holds finite numbers or null`);
  return value === 0 ? '0' : String(value);
}

/**
 * Spreadsheets take a cell for a formula when it starts with = + - @ (also full-width), a tab or a line end, and some skip
 * leading spaces first. An apostrophe in front keeps it text.
 */
function textCell(text: string): string {
  const inert = /^[\s\p{Cf}\p{Cc}]*[=+\-@＝＋－＠]|^[\t\r\n]/u.test(text) ? `'${text}` : text;
  return /[",\r\n\t;']|^\s|\s$/u.test(inert) ? `"${inert.replaceAll('"', '""')}"` : inert;
}
