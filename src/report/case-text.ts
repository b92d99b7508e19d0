import { textWidth } from './plain-text.ts';
import type { Report, ReportedCase } from './report.ts';

/** What a command adds to the summary of a check: lines on each case that it was run for. Ends with a line end. */
export function textOfCases(
  { cases }: Report,
  command: 'pump' | 'spread',
  columns: number,
  linesOf: (one: ReportedCase, width: number) => readonly string[],
): string {
  const ran = cases.filter((one) => one[command] !== undefined);
  return ran.map((one) => `${linesOf(one, textWidth(columns)).join('\n')}\n\n`).join('');
}
