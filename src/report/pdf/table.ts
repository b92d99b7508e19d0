import type { Column } from '../columns.ts';
import { type Element, lineHeight, type Paper, type TextStyle } from './paper.ts';

export interface TableOptions<Row> {
  readonly size?: number;
  readonly x?: number;
  readonly width?: number;
  /** A line over the whole width that heads a row and those below it; null for none. */
  readonly group?: (row: Row, index: number) => string | null;
  readonly isBold?: (row: Row) => boolean;
}

const GAP = 7;
const LEAST_SIZE = 4.5;
const GROUP_COLOUR = '#e8ecf2';

/** A tagged table from the current height down; its head is repeated on every page it runs over. */
export function drawTable<Row>(
  paper: Paper,
  parent: Element,
  rows: readonly Row[],
  columns: readonly Column<Row>[],
  options: TableOptions<Row> = {},
): void {
  const x = options.x ?? paper.left;
  const width = options.width ?? paper.right - x;
  const lines = rows.map((row): Line => {
    const weight = options.isBold?.(row) === true ? 'bold' : 'regular';
    return { weight, cells: columns.map(({ text }) => paper.readable(text(row), weight)) };
  });
  const { size, widths } = fittingSize(paper, columns, lines, width, options.size ?? 7);
  let offset = 0;
  const places = columns.map((column, i): Place => {
    const place = { column, x: x + offset, width: widths[i] };
    offset = offset + widths[i] + GAP;
    return place;
  });
  const step = lineHeight({ size }) + 1.2;
  const table = paper.child(parent, 'Table');
  const head = (): void => drawHead(paper, table, places, size, x + width);
  paper.need(headHeight(columns, size) + 2 * step);
  head();
  for (const [i, { weight, cells }] of lines.entries()) {
    const style = { size, weight };
    const texts = places.map((place, k) => cellLines(paper, place, cells[k], style));
    const height = step * Math.max(1, ...texts.map(({ length }) => length));
    const group = options.group?.(rows[i], i) ?? null;
    if (group !== null) {
      // a group's line stays with its first row
      turnFor(step + 2 + step);
      drawGroup(paper, table, group, x, width, { size, weight: 'bold' });
      paper.y += step + 2;
    }
    turnFor(height);
    drawRow(paper, table, places, 'TD', texts, step, style);
    paper.y += height;
  }
  table.end();
  paper.y += 6;

  function turnFor(height: number): void {
    if (paper.y + height <= paper.bottom) return;
    paper.newPage();
    head();
  }
}

interface Line {
  readonly weight: 'regular' | 'bold';
  readonly cells: readonly string[];
}

interface Place {
  readonly column: Column<never>;
  readonly x: number;
  readonly width: number;
}

/** The largest size, from the one wanted down, at which all `fit` columns leave the others some room. */
function fittingSize(
  paper: Paper,
  columns: readonly Column<never>[],
  lines: readonly Line[],
  width: number,
  wanted: number,
): { size: number; widths: number[] } {
  // text widths are proportional to the size: measured once
  const unitWidths = columns.map(({ head, unit = '', width: kind }, i) => {
    let widest = kind === 'fit' ? 0 : 9;
    for (const text of [head, unit])
      widest = Math.max(widest, paper.widthOf(text, { size: 1, weight: 'bold' }));
    if (kind === 'fit')
      for (const { weight, cells } of lines)
        widest = Math.max(widest, paper.widthOf(cells[i], { size: 1, weight }));
    return widest;
  });
  const least = unitWidths.reduce((sum, unitWidth) => sum + unitWidth, 0);
  const room = width - GAP * (columns.length - 1);
  const size = Math.max(LEAST_SIZE, Math.min(wanted, room / least));
  const sharing = columns.filter((column) => column.width !== 'fit').length;
  const extra = Math.max(0, room - least * size) / Math.max(1, sharing);
  const natural = unitWidths.map(
    (unitWidth, i) => unitWidth * size + (columns[i].width === 'fit' ? 0.01 : extra),
  );
  const shrink = Math.min(1, room / natural.reduce((sum, columnWidth) => sum + columnWidth, 0));
  return { size, widths: natural.map((columnWidth) => columnWidth * shrink) };
}

function headHeight(columns: readonly Pick<Column<never>, 'unit'>[], size: number): number {
  return lineHeight({ size }) * (columns.some(({ unit }) => unit !== undefined) ? 2 : 1) + 4;
}

function drawHead(paper: Paper, table: Element, places: readonly Place[], size: number, right: number): void {
  const style = { size, weight: 'bold' } as const;
  const texts = places.map(({ column: { head, unit = '' }, width }) =>
    [head, unit].map((text) => paper.clip(text, width + 0.1, style)),
  );
  drawRow(paper, table, places, 'TH', texts, lineHeight(style), style);
  paper.y +=
    headHeight(
      places.map(({ column }) => column),
      size,
    ) - 2;
  paper.rule(paper.y, places[0].x, right, '#444444', 0.6);
  paper.y += 2.5;
}

function cellLines(paper: Paper, { column, width }: Place, text: string, style: TextStyle): string[] {
  if (column.width === 'wrap') return paper.wrap(text, width, style);
  return [column.width === 'fit' ? text : paper.clip(text, width, style)];
}

/** One row of the structure, each cell in lines `step` apart. */
function drawRow(
  paper: Paper,
  table: Element,
  places: readonly Place[],
  type: 'TH' | 'TD',
  texts: readonly (readonly string[])[],
  step: number,
  style: TextStyle,
): void {
  const row = paper.child(table, 'TR');
  places.forEach(({ column, x, width }, i) => {
    const draw = (): void =>
      texts[i].forEach((text, line) => {
        const y = paper.y + line * step;
        if (column.align === 'right') paper.putRight(text, x + width, y, style);
        else paper.put(text, x, y, style);
      });
    paper.tagged(row, type, draw, type === 'TH' ? { scope: 'Column' } : {});
  });
  row.end();
}

function drawGroup(
  paper: Paper,
  table: Element,
  text: string,
  x: number,
  width: number,
  bold: TextStyle,
): void {
  const height = lineHeight(bold) + 1.6;
  paper.decoration(() => {
    paper.doc.rect(x - 2, paper.y - 0.6, width + 4, height).fill(GROUP_COLOUR);
  });
  const row = paper.child(table, 'TR');
  paper.tagged(row, 'TH', () => paper.put(paper.clip(text, width, bold), x, paper.y, bold), { scope: 'Row' });
  row.end();
}
