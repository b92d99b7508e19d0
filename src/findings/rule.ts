import type { Limits, Sourced } from '../chip/types.ts';
import type { Line, Place } from './closest.ts';
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
  readonly at: Place | null;
  /** The first is the one to look at. */
  readonly names: readonly string[];
  /** SI value and limit of the rule's measure; left out when it has none. A value that does not exist is null. */
  readonly measure?: { readonly value: number | null; readonly limit: number; readonly unit: string };
  /** The distance to draw at the place, mm; left out or null for none. */
  readonly mark?: Line | null;
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
    ...(mark ? { mark: toMark(mark) } : {}),
  };
}

function toMark([x1Mm, y1Mm, x2Mm, y2Mm]: Line): NonNullable<Finding['mark']> {
  return { x1Mm, y1Mm, x2Mm, y2Mm };
}

/** The measure of a rule that looks at lengths of the drawing, mm. */
export function lengthMeasure(valueMm: number, limitMm: number) {
  return { value: valueMm / 1e3, limit: limitMm / 1e3, unit: 'm' };
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

/** A rule that needs no limit. */
export function rule(name: string, run: (context: FindingContext) => readonly Finding[]): Rule {
  return { names: [name], run: (context) => found(run(context)) };
}

/** A rule of one limit: run with it, or listed as not run without; `key` as written under `limits` of a run sheet. */
export function limitRule(
  name: string,
  key: string,
  field: LimitField,
  run: (context: FindingContext, limit: Sourced<number>) => readonly Finding[],
): Rule {
  return {
    names: [name],
    run: (context) => {
      const limit = context.run.limits[field];
      return limit === null ? withoutLimit(name, key, context) : found(run(context, limit));
    },
  };
}

/** Limits that are one number, or not given. */
type LimitField = {
  [K in keyof Limits]: Limits[K] extends Sourced<number> | null ? K : never;
}[keyof Limits];
