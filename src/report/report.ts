import type { FindingReport } from '../findings/types.ts';
import type { Network } from '../network/types.ts';
import { type Show, showOf } from '../runsheet/shown.ts';
import type { FoundSettings } from '../solve/targets.ts';
import type { FlowState } from '../solve/types.ts';
import type { Spread } from '../spread/types.ts';
import { cleanText } from './plain-text.ts';
import { buildCasesResult, buildResult, type CasePart, type Result, type ResultInput } from './result.ts';

/** One case with everything that its pages, pictures and summary are drawn from. */
export interface ReportedCase {
  /** null when the run sheet has no cases. */
  readonly name: string | null;
  readonly part: CasePart;
  readonly network: Network;
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

/** Report of a layout without cases. */
export function buildReport(input: ResultInput): Report {
  const result = buildResult(input);
  return { result, cases: [reportedCase(null, input, result)], sheetCases: [] };
}

/**
 * Report of a layout under several cases, in the order given.
 * @param sheetCases names of all cases of the run sheet, where not all are reported
 */
export function buildCasesReport(
  cases: readonly { readonly name: string; readonly input: ResultInput }[],
  sheetCases: readonly string[] = cases.map(({ name }) => name),
): Report {
  const result = buildCasesResult(cases);
  return {
    result,
    cases: cases.map(({ name, input }, i) => reportedCase(name, input, result.cases[i])),
    sheetCases,
  };
}

function reportedCase(name: string | null, input: ResultInput, part: CasePart): ReportedCase {
  const { network, flow, findings, chip } = input;
  return {
    name,
    part,
    network,
    flow,
    findings,
    show: showOf(chip.sheet?.show ?? null),
    centrelineFlow: input.centrelineFlow ?? null,
  };
}
