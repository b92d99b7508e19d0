import { listText } from '../findings/words.ts';
import { cleanText } from './plain-text.ts';
import { casesLeftOut, type Report } from './report.ts';
import type { CountsRow } from './result-rows.ts';

/** The verdict, never without its counts: "ready: 0 blockers, 3 cautions, 2 accepted, 4 rules not run". */
export function verdictLine(verdict: 'ready' | 'hold', counts: CountsRow): string {
  return `${verdict}: ${verdictCounts(counts)}`;
}

export function verdictCounts(
  counts: Pick<CountsRow, 'blockers' | 'cautions' | 'accepted' | 'rules_not_run'>,
): string {
  return [
    plural(counts.blockers, 'blocker'),
    plural(counts.cautions, 'caution'),
    `${counts.accepted} accepted`,
    `${plural(counts.rules_not_run, 'rule')} not run`,
  ].join(', ');
}

/** "all 3 cases: ready", or "1 of 3 cases: ready; not looked at: seed and rest". */
export function casesLine(report: Report): string {
  const { result, cases, sheetCases } = report;
  const leftOut = casesLeftOut(report);
  if (leftOut.length === 0) return `all ${plural(cases.length, 'case')}: ${result.verdict}`;
  return `${cases.length} of ${plural(sheetCases.length, 'case')}: ${result.verdict}; not looked at: ${cleanText(listText(leftOut, 8))}`;
}

export function plural(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
