import type { Run } from '../chip/types.ts';
import type { FindingReport } from '../findings/types.ts';
import type { Network } from '../network/types.ts';
import { type Show, showOf } from '../runsheet/shown.ts';
import type { FoundSettings } from '../solve/targets.ts';
import type { FlowState } from '../solve/types.ts';
import type { Spread } from '../spread/types.ts';
import { cleanText } from './plain-text.ts';
import { buildResult, type CaseInput, type CasePart, type ReportInput, type Result } from './result.ts';

/** One case with everything that its pages, pictures and summary are drawn from. */
export interface ReportedCase {
  /** null when the run sheet has no cases. */
  readonly name: string | null;
  readonly part: CasePart;
  readonly network: Network;
  readonly run: Run;
  readonly flow: FlowState;
  readonly findings: FindingReport;
  readonly show: Show;
  /** Only of the command pump: the settings behind part.pump. */
  readonly pump?: FoundSettings;
  /** Only of the command spread: what is behind part.spread. */
  readonly spread?: Spread;
  /** The flows that counting centrelines alone would give; null where nobody can say. */
  readonly centrelineFlow: (() => FlowState) | null;
}

/** What all writers take: the result document, and the cases behind it in the same order. */
export interface Report {
  readonly result: Result;
  readonly cases: readonly ReportedCase[];
  /** Names of all cases of the run sheet, in its order, also of those that were not looked at; none for a sheet without cases. */
  readonly sheetCases: readonly string[];
}

/** Cases of the run sheet that were left out (--case): nobody has said anything of them. */
export function casesLeftOut({ cases, sheetCases }: Pick<Report, 'cases' | 'sheetCases'>): readonly string[] {
  const seen = new Set(cases.map(({ name }) => name));
  return sheetCases.filter((name) => !seen.has(name));
}

/** "Spread, case cold", or the title alone where there are no cases. */
export function ofCase(title: string, { name }: Pick<ReportedCase, 'name'>): string {
  return name === null ? title : `${title}, case ${cleanText(name)}`;
}

/** The report of a layout under its cases, in the order given. */
export function buildReport(input: ReportInput): Report {
  const result = buildResult(input);
  const parts = 'cases' in result ? result.cases : [result];
  return {
    result,
    cases: input.cases.map((one, i) => reportedCase(one, parts[i])),
    sheetCases: input.sheet?.cases.map(({ name }) => name) ?? [],
  };
}

function reportedCase(
  { name, network, run, flow, findings, centrelineFlow, found, spread }: CaseInput,
  part: CasePart,
): ReportedCase {
  return {
    name,
    part,
    network,
    run,
    flow,
    findings,
    show: showOf(run.sheet?.show ?? null),
    centrelineFlow: centrelineFlow ?? null,
    ...(found === undefined ? {} : { pump: found }),
    ...(spread === undefined ? {} : { spread }),
  };
}
