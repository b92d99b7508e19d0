import { cleanText, wrapText } from './plain-text.ts';
import type { Report, ReportedCase } from './report.ts';
import { cornerText, moves, remarks, spreadCells, toleranceText, yieldText } from './spread-rows.ts';
import { textTable } from './text-table.ts';

const MOST_LINES = 32;

/** What the command spread adds to the summary of a check: how sure each number is and what makes it so. Ends with a line end. */
export function spreadText(report: Report, columns: number): string {
  const width = Math.max(40, Math.min(100, columns));
  return report.cases
    .filter(({ spread }) => spread !== undefined)
    .map((one) => `${caseLines(one, width).join('\n')}\n\n`)
    .join('');
}

function caseLines({ name, spread, show }: ReportedCase, width: number): readonly string[] {
  if (spread === undefined) return [];
  const { causes, draws, seed, outputs } = spread;
  const wrap = (text: string): string[] => wrapText(cleanText(text), width);
  const moving = outputs.filter(moves);
  const first = [...moving].sort((a, b) => Number(b.hasWindow) - Number(a.hasWindow)).slice(0, MOST_LINES);
  const listed = moving.filter((output) => first.includes(output));
  const still = outputs.length - moving.length;
  return [
    ...wrap(`spread${name === null ? '' : `, case ${name}`}: ${draws} draws, seed ${seed}`),
    ...wrap(`tolerances: ${causes.map((cause) => `${cause.key} ${toleranceText(cause, show)}`).join('; ')}`),
    ...wrap(yieldText(spread)),
    ...[cornerText(spread, show) ?? []].flat().flatMap(wrap),
    ...remarks(spread).flatMap(wrap),
    ...(listed.length === 0
      ? []
      : textTable(
          [
            { head: 'what', align: 'left' },
            { head: 'quantity', align: 'left' },
            { head: 'nominal', align: 'right' },
            { head: 'sd', align: 'right' },
            { head: '2.5 %', align: 'right' },
            { head: '97.5 %', align: 'right' },
            { head: 'unit', align: 'left' },
            { head: 'asked', align: 'left' },
            { head: 'by', align: 'left' },
          ],
          listed.map((output) => {
            const cells = spreadCells(output, spread, show);
            return [
              cleanText(cells.what),
              cells.quantity,
              cells.nominal,
              draws === 0 ? cells.linearSd : cells.sd,
              cells.low,
              cells.high,
              cells.unit,
              output.hasWindow ? cells.asked : '',
              cleanText(cells.causes),
            ];
          }),
          width,
        )),
    ...(moving.length > listed.length
      ? [`… and ${moving.length - listed.length} more: see the reports`]
      : []),
    ...(still > 0 ? [`${still} more numbers do not move`] : []),
  ];
}
