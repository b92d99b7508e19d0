export { isAbove, isBelow } from '../asked/within.ts';

import type { Sourced } from '../chip/types.ts';
import type { FindingContext } from './context.ts';
import type { Finding, NotRun, Severity } from './types.ts';

/** One check, or a few that share their work. */
export interface Rule {
  /** The rules of the findings it can make, and of what it may report as not run. */
  readonly names: readonly string[];
  /** It has something to say of a drawing whose channels are all drawn as outlines. */
  readonly withoutChannels?: true;
  readonly run: (context: FindingContext) => RuleOutcome;
}

export interface RuleOutcome {
  readonly findings: readonly Finding[];
  readonly notRun: readonly NotRun[];
}

/** What a rule says about one fault; the rest of a Finding is filled in here. */
export interface FindingParts {
  readonly message: string;
  readonly fix: string;
  /** Where to look; null for a fault of the whole chip. */
  readonly at: { readonly xMm: number; readonly yMm: number } | null;
  /** The first is the one to look at. */
  readonly names: readonly string[];
  /** SI value and limit of the rule's measure; left out when it has none. A value that does not exist is null. */
  readonly measure?: { readonly value: number | null; readonly limit: number; readonly unit: string };
  readonly mark?: Finding['mark'];
}

/** A finding that nobody has accepted yet. */
export function toFinding(rule: string, severity: Severity, parts: FindingParts): Finding {
  const { message, fix, at, names, measure, mark } = parts;
  return {
    rule,
    severity,
    message,
    fix,
    xMm: finiteOrNull(at?.xMm),
    yMm: finiteOrNull(at?.yMm),
    names,
    measured: finiteOrNull(measure?.value),
    limit: measure?.limit ?? null,
    unit: measure?.unit ?? null,
    accepted: null,
    ...(mark === undefined ? {} : { mark }),
  };
}

/** A place or value that does not exist is null, never NaN or infinity. */
function finiteOrNull(value: number | null | undefined): number | null {
  return value !== undefined && value !== null && Number.isFinite(value) ? value : null;
}

export function found(findings: readonly Finding[]): RuleOutcome {
  return { findings, notRun: [] };
}

export function notRun(rule: string, why: string): RuleOutcome {
  return { findings: [], notRun: [{ rule, why }] };
}

/** Why a rule without its limit is not run; `key` as written under `limits` of a run sheet. */
export function withoutLimit(rule: string, key: string, { chip }: FindingContext): RuleOutcome {
  const process = chip.process === null ? 'no process is named' : `"${chip.process}" implies none`;
  return notRun(rule, `limits.${key} is not given and ${process}`);
}

/** A rule of one limit: run with it, or listed as not run without. */
export function limitRule<T>(
  name: string,
  key: string,
  limitOf: (context: FindingContext) => Sourced<T> | null,
  run: (context: FindingContext, limit: Sourced<T>) => readonly Finding[],
): Rule {
  return {
    names: [name],
    run: (context) => {
      const limit = limitOf(context);
      return limit === null ? withoutLimit(name, key, context) : found(run(context, limit));
    },
  };
}
