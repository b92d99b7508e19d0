import type { CountsRow } from './result-schema.ts';

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

export function plural(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
