import { countText, listText } from '../findings/words.ts';
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
    countText(counts.blockers, 'blocker'),
    countText(counts.cautions, 'caution'),
    `${counts.accepted} accepted`,
    `${countText(counts.rules_not_run, 'rule')} not run`,
  ].join(', ');
}

/** "all 3 cases: ready", or "1 of 3 cases: ready; not looked at: seed and rest". */
export function casesLine(report: Report): string {
  const { result, cases, sheetCases } = report;
  const leftOut = casesLeftOut(report);
  if (leftOut.length === 0) return `all ${countText(cases.length, 'case')}: ${result.verdict}`;
  return `${cases.length} of ${countText(sheetCases.length, 'case')}: ${result.verdict}; not looked at: ${cleanText(listText(leftOut, 8))}`;
}
