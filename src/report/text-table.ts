import type { Column } from './columns.ts';
import { cleanText, clipText, displayWidth, padText } from './plain-text.ts';

/**
 * Aligned columns two spaces apart, the head first; a column without any cell is left out. What does not fit into `width` is cut, the widest column first.
 */
export function textTable<Row>(
  rows: readonly Row[],
  columns: readonly Column<Row>[],
  width: number,
): readonly string[] {
  const used = columns
    .map(({ head, align, text }) => ({ head, align, cells: rows.map((row) => cleanText(text(row))) }))
    .filter(({ cells }) => cells.some((cell) => cell !== ''));
  const widths = used.map(({ head, cells }) => Math.max(...[head, ...cells].map(displayWidth)));
  const over = (): number =>
    widths.reduce((sum, columnWidth) => sum + columnWidth, 0) + 2 * (widths.length - 1) - width;
  while (over() > 0) {
    const widest = widths.indexOf(Math.max(...widths));
    if (widths[widest] <= LEAST_WIDTH) break;
    widths[widest]--;
  }
  const line = (texts: readonly string[]): string =>
    used
      .map(({ align }, i) =>
        padText(clipText(texts[i], widths[i]), widths[i], align === 'right' ? 'left' : 'right'),
      )
      .join('  ')
      .trimEnd();
  return [
    line(used.map(({ head }) => head)),
    ...rows.map((_, row) => line(used.map(({ cells }) => cells[row]))),
  ];
}

const LEAST_WIDTH = 4;
