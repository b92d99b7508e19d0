import type { Paper, TextStyle } from './paper.ts';
import type { Section } from './section.ts';

/** What charts have in common: how they stand on the page, their field, window and colours. Lengths in points. */
export const INK = '#222222';
export const TITLE: TextStyle = { size: 7, weight: 'bold' };
export const LABEL: TextStyle = { size: 6.2 };
/** Bars and curves of what was computed. */
export const DARK = '#1b4965';
export const BAND_EDGE = '#5c8a48';
export const BAND = '#dcebd5';

/** The field that curves are drawn in, and where a value stands in it. */
export interface Field {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
  readonly toX: (value: number) => number;
}

export function fieldOf(
  sides: Omit<Field, 'toX'>,
  { low, high }: { readonly low: number; readonly high: number },
): Field {
  const { left, right } = sides;
  return { ...sides, toX: (value) => left + ((value - low) / (high - low)) * (right - left) };
}

/** Figures side by side, `perRow` of them; turns pages between rows. */
export function writeCharts<Chart>(
  section: Section,
  charts: readonly Chart[],
  { perRow, gap, height }: { readonly perRow: number; readonly gap: number; readonly height: number },
  paint: (chart: Chart, x: number, y: number, width: number) => void,
  alt: (chart: Chart) => string,
): void {
  const { paper } = section;
  const width = (paper.width - (perRow - 1) * gap) / perRow;
  charts.forEach((chart, i) => {
    const column = i % perRow;
    if (column === 0) paper.need(height);
    const x = paper.left + column * (width + gap);
    section.figure(alt(chart), () => paint(chart, x, paper.y, width));
    if (column === perRow - 1 || i === charts.length - 1) paper.y += height;
  });
}

/** Draws what is cut off at the field, then the field's frame. */
export function paintField(
  { doc }: Paper,
  { left, right, top, bottom }: Field,
  lineWidth: number,
  draw: () => void,
): void {
  doc.save();
  doc.rect(left, top, right - left, bottom - top).clip();
  draw();
  doc.restore();
  doc
    .rect(left, top, right - left, bottom - top)
    .lineWidth(lineWidth)
    .stroke(INK);
}

/** Lines at what is asked; an open end has none. */
export function paintEnds(
  { doc }: Paper,
  { top, bottom, toX }: Field,
  { min, max }: { readonly min: number | null; readonly max: number | null },
  lineWidth: number,
): void {
  for (const end of [min, max]) {
    if (end === null) continue;
    doc.moveTo(toX(end), top).lineTo(toX(end), bottom).lineWidth(lineWidth).stroke(BAND_EDGE);
  }
}
