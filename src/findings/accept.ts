import { isAbove, isBelow } from '../asked/within.ts';
import { grouped } from '../by-key.ts';
import { acceptedName } from '../chip/accept.ts';
import { UNACCEPTABLE_RULES } from '../runsheet/measures.ts';
import { measureText, type Show } from '../runsheet/shown.ts';
import type { AcceptEntry } from '../runsheet/types.ts';
import { toFinding } from './rule.ts';
import type { Finding, NotRun } from './types.ts';
import { listText } from './words.ts';

/**
 * Marks the findings that the run sheet's `accept` entries take on, and adds `unmatched-accept` for entries that match
 * nothing. An entry matches a finding of its rule that bears its name, or a name that its pattern matches; it accepts it while the measured value lies on the
 * safe side of `up_to`. Which side that is follows from the finding: a value below its limit must not fall below the
 * ceiling, one above its limit must not rise above it.
 *
 * `ruleNames` are the rules of this check: an entry for a rule that another command runs is left alone. `madeUp` are names that
 * the drawing does not have, which no pattern may mean.
 */
export function acceptFindings(
  findings: readonly Finding[],
  notRun: readonly NotRun[],
  entries: readonly AcceptEntry[],
  ruleNames: ReadonlySet<string>,
  show: Show,
  madeUp: ReadonlySet<string> = new Set(),
): Finding[] {
  if (entries.length === 0) return [...findings];
  const byRule = grouped(entries, ({ rule }) => rule);
  const matched = new Set<AcceptEntry>();
  const judged = findings.map((finding) => {
    const named = (byRule.get(finding.rule) ?? []).filter(
      ({ at }) => acceptedName(at, finding.names, madeUp) !== null,
    );
    if (named.length === 0 || UNACCEPTABLE_RULES.has(finding.rule)) return finding;
    for (const entry of named) matched.add(entry);
    const taken = named.find((entry) => objection(entry, finding, show) === null);
    if (taken !== undefined)
      return { ...finding, message: acceptedMessage(finding, taken, madeUp), accepted: taken };
    return { ...finding, message: `${finding.message}; ${objection(named[0], finding, show)}` };
  });
  const unmatched = entries.filter((entry) => !matched.has(entry) && ruleNames.has(entry.rule));
  return judged.concat(unmatched.map((entry) => unmatchedAccept(entry, findings, notRun)));
}

/** A pattern may match more than was thought of, so what it matched is said. */
function acceptedMessage(
  { message, names }: Finding,
  { at }: AcceptEntry,
  madeUp: ReadonlySet<string>,
): string {
  const name = acceptedName(at, names, madeUp);
  return name === null || name === at ? message : `${message}; accepted as ${name}, which ${at} matches`;
}

/** Why an entry that names the finding does not accept it; null when it does. */
function objection(entry: AcceptEntry, finding: Finding, show: Show): string | null {
  const { measured, limit, unit } = finding;
  if (entry.upTo === null) return null;
  const who = `${entry.by}, ${entry.on}`;
  if (entry.upToUnit !== undefined && unit !== null && entry.upToUnit !== unit) {
    const given = measureText(show, entry.upTo, entry.upToUnit, finding.rule);
    return `not covered by the accepted ${given} (${who}), which is of another kind`;
  }
  const ceiling = `the accepted ${measureText(show, entry.upTo, unit, finding.rule)} (${who})`;
  if (measured === null || limit === null) return `not covered by ${ceiling}: there is no value to compare`;
  const isBeyond = measured < limit ? isBelow(measured, entry.upTo) : isAbove(measured, entry.upTo);
  return isBeyond ? `beyond ${ceiling}` : null;
}

function unmatchedAccept(
  entry: AcceptEntry,
  findings: readonly Finding[],
  notRun: readonly NotRun[],
): Finding {
  const { rule, at, line } = entry;
  const skipped = notRun.find((one) => one.rule === rule);
  const same = findings.filter((finding) => finding.rule === rule);
  const elsewhere = [...new Set(same.flatMap(({ names }) => names))];
  const reason =
    skipped !== undefined
      ? `the rule was not run: ${skipped.why}`
      : elsewhere.length === 0
        ? `there is no ${rule} finding`
        : `${rule} findings are at ${listText(elsewhere, 8)}`;
  const finding = toFinding('unmatched-accept', 'caution', {
    message: `the accept entry in line ${line} of the run sheet, ${rule} at ${at}, matches no finding; ${reason}`,
    fix: 'take the entry out of the run sheet, or correct its rule or its name',
    at: null,
    names: [at],
  });
  return { ...finding, unmatched: entry };
}
