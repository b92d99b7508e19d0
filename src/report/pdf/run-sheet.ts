import { type PageContext, SMALL } from './context.ts';
import { lineHeight } from './paper.ts';
import { chapter } from './section.ts';

/** The run sheet in full, with line numbers, as it was read. */
export function writeRunSheet({ paper, report, one }: PageContext): void {
  const { sheet } = one.run;
  const section = chapter(paper, 'Run sheet', 'portrait', 200);
  if (sheet === null) {
    section.paragraph('The chip was checked without a run sheet.');
    return;
  }
  section.paragraph(
    `${report.result.run_sheet?.file ?? ''}, SHA-256 ${report.result.run_sheet?.sha256 ?? ''}`,
    SMALL,
  );
  const lines = sheet.text.replace(/\r?\n$/, '').split(/\r?\n/);
  const style = { size: 6.8 } as const;
  const numberStyle = { size: 6.8, colour: '#777777' } as const;
  const numberWidth = paper.widthOf(String(lines.length), style);
  const step = lineHeight(style);
  lines.forEach((line, i) => {
    // the indentation is kept by place, since spaces at a line's start would be lost in wrapping
    const indent = line.length - line.trimStart().length;
    const x = paper.left + numberWidth + 8 + indent * 3.4;
    const x0 = Math.min(x, paper.left + paper.width / 2);
    const pieces = paper.wrap(line.trim(), paper.right - x0, style);
    pieces.forEach((piece, k) => {
      paper.need(step);
      paper.tagged(section.element, 'Code', () => {
        if (k === 0) paper.putRight(String(i + 1), paper.left + numberWidth, paper.y, numberStyle);
        paper.put(piece, x0, paper.y, style);
      });
      paper.y += step;
    });
  });
}
