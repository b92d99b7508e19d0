import type { Show } from '../runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../spread/types.ts';
import { textOfCases } from './case-text.ts';
import { type Column, words } from './columns.ts';
import { cleanText, wrapText } from './plain-text.ts';
import { ofCase, type Report, type ReportedCase } from './report.ts';
import { cornerText, moves, remarks, spreadColumns, toleranceText, yieldText } from './spread-rows.ts';
import { textTable } from './text-table.ts';

const MOST_LINES = 32;

/** What the command spread adds to the summary of a check: how sure each number is and what makes it so. Ends with a line end. */
export function spreadText(report: Report, columns: number): string {
  return textOfCases(report, 'spread', columns, caseLines);
}

function caseLines(one: ReportedCase, width: number): readonly string[] {
  const { spread, show } = one;
  if (spread === undefined) return [];
  const { causes, draws, seed, outputs } = spread;
  const wrap = (text: string): string[] => wrapText(cleanText(text), width);
  const moving = outputs.filter(moves);
  const first = [...moving].sort((a, b) => Number(b.hasWindow) - Number(a.hasWindow)).slice(0, MOST_LINES);
  const listed = moving.filter((output) => first.includes(output));
  const still = outputs.length - moving.length;
  return [
    ...wrap(`${ofCase('spread', one)}: ${draws} draws, seed ${seed}`),
    ...wrap(`tolerances: ${causes.map((cause) => `${cause.key} ${toleranceText(cause, show)}`).join('; ')}`),
    ...wrap(yieldText(spread)),
    ...[cornerText(spread, show) ?? []].flat().flatMap(wrap),
    ...remarks(spread).flatMap(wrap),
    ...(listed.length === 0 ? [] : textTable(listed, columnsOf(spread, show), width)),
    ...(moving.length > listed.length
      ? [`… and ${moving.length - listed.length} more: see the reports`]
      : []),
    ...(still > 0 ? [`${still} more numbers do not move`] : []),
  ];
}

function columnsOf(spread: Spread, show: Show): readonly Column<SpreadOutput>[] {
  const { what, quantity, nominal, sd, linearSd, low, high, unit, asked, causes } = spreadColumns(
    spread,
    show,
  );
  const deviation = spread.draws === 0 ? { ...linearSd, head: 'sd' } : sd;
  const window = words<SpreadOutput>('asked', (output) => (output.hasWindow ? asked.text(output) : ''));
  return [what, quantity, nominal, deviation, low, high, unit, window, { ...causes, head: 'by' }];
}
