import { grouped } from '../by-key.ts';
import { madeUpNames } from '../chip/accept.ts';
import type { AcceptEntry } from '../runsheet/types.ts';
import { acceptFindings } from './accept.ts';
import type { FindingContext } from './context.ts';
import { isAllOutlines } from './outlines.ts';
import type { Rule, RuleOutcome } from './rule.ts';
import { RULES } from './rules.ts';
import type { Finding, FindingReport, NotRun, Severity } from './types.ts';
import { showFor } from './words.ts';

/**
 * Runs every rule on a chip, marks what the run sheet accepts, and gives the verdict: `ready` when no blocker is left that
 * nobody accepted.
 *
 * Cost: linear in pieces, reaches and near pairs, but for sorting the findings.
 */
export function findAll(context: FindingContext, rules: readonly Rule[] = RULES): FindingReport {
  const hasChannels = !isAllOutlines(context);
  const outcomes = rules.map((rule) =>
    hasChannels || rule.withoutChannels === true ? rule.run(context) : withoutChannels(rule),
  );
  const raw = outcomes.flatMap(({ findings }) => findings);
  const notRun = onePerRule(outcomes.flatMap((outcome) => outcome.notRun));
  const ruleNames = new Set(rules.flatMap(({ names }) => names));
  const { chip, run } = context;
  const show = showFor(context);
  const findings = acceptFindings(raw, notRun, run.accept, ruleNames, show, madeUpNames(chip));
  return toReport(findings.sort(byUrgency), notRun);
}

/**
 * Cases of one run sheet share its `accept` entries: one that matches a finding in any case is not unmatched in the others.
 */
export function settleAccepts(reports: readonly FindingReport[]): FindingReport[] {
  const accepted = reports.flatMap(({ findings }) => findings.flatMap((finding) => finding.accepted ?? []));
  const matched = new Set(accepted.map(entryKey));
  return reports.map((report) => {
    const kept = report.findings.filter(
      ({ unmatched }) => unmatched === undefined || !matched.has(entryKey(unmatched)),
    );
    return kept.length === report.findings.length ? report : toReport(kept, report.notRun);
  });
}

/** Several entries may stand in one line. */
function entryKey({ line, rule, at }: AcceptEntry): string {
  return `${line} ${rule} ${at}`;
}

/** Where every channel is drawn as an outline, that is the fault: what else would be found follows from it. */
function withoutChannels({ names }: Rule): RuleOutcome {
  const why = 'there is no channel, only outlines (filled-outline)';
  return { findings: [], notRun: names.map((rule) => ({ rule, why })) };
}

function toReport(findings: readonly Finding[], notRun: readonly NotRun[]): FindingReport {
  const open = findings.filter(({ accepted }) => accepted === null);
  const countOf = (severity: Severity): number => open.filter((one) => one.severity === severity).length;
  const blockers = countOf('blocker');
  return {
    findings,
    notRun,
    verdict: blockers === 0 ? 'ready' : 'hold',
    counts: {
      blockers,
      cautions: countOf('caution'),
      notes: countOf('note'),
      accepted: findings.length - open.length,
      rulesNotRun: notRun.length,
    },
  };
}

/** One line per rule, with all its reasons, by rule name. */
function onePerRule(skipped: readonly NotRun[]): NotRun[] {
  return [...grouped(skipped, ({ rule }) => rule)]
    .map(([rule, reasons]) => ({ rule, why: [...new Set(reasons.map(({ why }) => why))].join('; ') }))
    .sort((a, b) => compareText(a.rule, b.rule));
}

const URGENCY: Readonly<Record<Severity, number>> = { blocker: 0, caution: 1, note: 2 };

/** Blockers first; then by rule and place, then by name, so that one input gives one order. */
function byUrgency(a: Finding, b: Finding): number {
  return (
    URGENCY[a.severity] - URGENCY[b.severity] ||
    compareText(a.rule, b.rule) ||
    compareNumber(a.xMm, b.xMm) ||
    compareNumber(a.yMm, b.yMm) ||
    compareText(a.names.join('\n'), b.names.join('\n')) ||
    compareText(a.message, b.message)
  );
}

function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

/** What has a place comes before what has none. */
function compareNumber(a: number | null, b: number | null): number {
  if (a === null || b === null) return (a === null ? 1 : 0) - (b === null ? 1 : 0);
  return a - b;
}
