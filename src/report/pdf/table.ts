import { type Element, lineHeight, type Paper, type TextStyle } from './paper.ts';

export interface Column {
  readonly head: string;
  /** Second line of the head. */
  readonly unit?: string;
  readonly align: 'left' | 'right';
  /** `fit`: as wide as its widest cell, never cut. `share`: an equal share of what is left, cut with an ellipsis. `wrap`: the same, in lines. */
  readonly width: 'fit' | 'share' | 'wrap';
}

export type TableRow =
  | { readonly kind: 'cells'; readonly cells: readonly string[]; readonly weight?: 'bold' }
  /** A line over the whole width that heads the rows below it. */
  | { readonly kind: 'group'; readonly text: string };

export interface TableOptions {
  readonly size?: number;
  readonly x?: number;
  readonly width?: number;
}

export function cells(...texts: readonly string[]): TableRow {
  return { kind: 'cells', cells: texts };
}

const GAP = 7;
const LEAST_SIZE = 4.5;
const GROUP_COLOUR = '#e8ecf2';

/** A tagged table from the current height down; its head is repeated on every page it runs over. */
export function drawTable(
  paper: Paper,
  parent: Element,
  columns: readonly Column[],
  rows: readonly TableRow[],
  options: TableOptions = {},
): void {
  const x = options.x ?? paper.left;
  const width = options.width ?? paper.right - x;
  const readable = rows.map((row) => readableRow(paper, row));
  const { size, widths } = fittingSize(paper, columns, readable, width, options.size ?? 7);
  const style = { size };
  const step = lineHeight(style) + 1.2;
  const edges = widths.map(
    (_, i) => x + widths.slice(0, i).reduce((sum, columnWidth) => sum + columnWidth + GAP, 0),
  );
  const table = paper.child(parent, 'Table');
  paper.need(headHeight(columns, size) + 2 * step);
  drawHead(paper, table, columns, edges, widths, size, x + width);
  for (const [i, row] of readable.entries()) {
    const lines =
      row.kind === 'cells' ? rowLines(paper, columns, row.cells, widths, rowStyle(style, row)) : [];
    const height = row.kind === 'group' ? step + 2 : step * Math.max(1, ...lines.map(({ length }) => length));
    // a group's line stays with its first row
    const needed = row.kind === 'group' && i + 1 < readable.length ? height + step : height;
    if (paper.y + needed > paper.bottom) {
      paper.newPage();
      drawHead(paper, table, columns, edges, widths, size, x + width);
    }
    if (row.kind === 'group') drawGroup(paper, table, row.text, x, width, style);
    else drawCells(paper, table, columns, lines, edges, widths, rowStyle(style, row), step);
    paper.y += height;
  }
  table.end();
  paper.y += 6;
}

function readableRow(paper: Paper, row: TableRow): TableRow {
  if (row.kind === 'group') return row;
  return { ...row, cells: row.cells.map((text) => paper.readable(text, row.weight)) };
}

function rowStyle(style: TextStyle, row: { readonly weight?: 'bold' }): TextStyle {
  return row.weight === undefined ? style : { ...style, weight: row.weight };
}

/** The largest size, from the one wanted down, at which all `fit` columns leave the others some room. */
function fittingSize(
  paper: Paper,
  columns: readonly Column[],
  rows: readonly TableRow[],
  width: number,
  wanted: number,
): { size: number; widths: number[] } {
  // text widths are proportional to the size: measured once
  const unitWidths = columns.map((column, i) => {
    const heads = [column.head, column.unit ?? ''].map((text) =>
      paper.widthOf(text, { size: 1, weight: 'bold' }),
    );
    if (column.width !== 'fit') return Math.max(...heads, 9);
    let widest = Math.max(...heads);
    for (const row of rows) {
      if (row.kind === 'cells')
        widest = Math.max(widest, paper.widthOf(row.cells[i], rowStyle({ size: 1 }, row)));
    }
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

function headHeight(columns: readonly Column[], size: number): number {
  return lineHeight({ size }) * (columns.some(({ unit }) => unit !== undefined) ? 2 : 1) + 4;
}

function drawHead(
  paper: Paper,
  table: Element,
  columns: readonly Column[],
  edges: readonly number[],
  widths: readonly number[],
  size: number,
  right: number,
): void {
  const style = { size, weight: 'bold' } as const;
  const row = paper.child(table, 'TR');
  columns.forEach((column, i) => {
    paper.tagged(
      row,
      'TH',
      () => {
        [column.head, column.unit ?? ''].forEach((text, line) => {
          putAligned(
            paper,
            paper.clip(text, widths[i] + 0.1, style),
            column,
            edges[i],
            widths[i],
            paper.y + line * lineHeight(style),
            style,
          );
        });
      },
      { scope: 'Column' },
    );
  });
  row.end();
  paper.y += headHeight(columns, size) - 2;
  paper.rule(paper.y, edges[0], right, '#444444', 0.6);
  paper.y += 2.5;
}

function rowLines(
  paper: Paper,
  columns: readonly Column[],
  texts: readonly string[],
  widths: readonly number[],
  style: TextStyle,
): string[][] {
  return columns.map((column, i) => {
    if (column.width === 'wrap') return paper.wrap(texts[i], widths[i], style);
    return [column.width === 'fit' ? texts[i] : paper.clip(texts[i], widths[i], style)];
  });
}

function drawCells(
  paper: Paper,
  table: Element,
  columns: readonly Column[],
  lines: readonly (readonly string[])[],
  edges: readonly number[],
  widths: readonly number[],
  style: TextStyle,
  step: number,
): void {
  const row = paper.child(table, 'TR');
  columns.forEach((column, i) => {
    paper.tagged(row, 'TD', () => {
      lines[i].forEach((text, line) => {
        putAligned(paper, text, column, edges[i], widths[i], paper.y + line * step, style);
      });
    });
  });
  row.end();
}

function drawGroup(
  paper: Paper,
  table: Element,
  text: string,
  x: number,
  width: number,
  style: TextStyle,
): void {
  const bold = { ...style, weight: 'bold' } as const;
  const height = lineHeight(style) + 1.6;
  paper.decoration(() => {
    paper.doc.rect(x - 2, paper.y - 0.6, width + 4, height).fill(GROUP_COLOUR);
  });
  const row = paper.child(table, 'TR');
  paper.tagged(row, 'TH', () => paper.put(paper.clip(text, width, bold), x, paper.y, bold), { scope: 'Row' });
  row.end();
}

function putAligned(
  paper: Paper,
  text: string,
  column: Column,
  x: number,
  width: number,
  y: number,
  style: TextStyle,
): void {
  if (column.align === 'right') paper.putRight(text, x + width, y, style);
  else paper.put(text, x, y, style);
}
