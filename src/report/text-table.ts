import { clipText, displayWidth, padText } from './plain-text.ts';

export interface TextColumn {
  readonly head: string;
  readonly align: 'left' | 'right';
}

/**
 * Aligned columns two spaces apart, the head first; a column without any cell is left out. What does not fit into `width` is cut, the widest column first.
 */
export function textTable(
  columns: readonly TextColumn[],
  rows: readonly (readonly string[])[],
  width: number,
): readonly string[] {
  const used = columns.map((_, i) => i).filter((i) => rows.some((row) => row[i] !== ''));
  const widths = used.map((i) =>
    Math.max(displayWidth(columns[i].head), ...rows.map((row) => displayWidth(row[i]))),
  );
  const over = (): number =>
    widths.reduce((sum, columnWidth) => sum + columnWidth, 0) + 2 * (widths.length - 1) - width;
  while (over() > 0) {
    const widest = widths.indexOf(Math.max(...widths));
    if (widths[widest] <= LEAST_WIDTH) break;
    widths[widest]--;
  }
  const line = (row: readonly string[]): string =>
    used
      .map((i, k) =>
        padText(clipText(row[i], widths[k]), widths[k], columns[i].align === 'right' ? 'left' : 'right'),
      )
      .join('  ')
      .trimEnd();
  return [line(columns.map(({ head }) => head)), ...rows.map(line)];
}

const LEAST_WIDTH = 4;
