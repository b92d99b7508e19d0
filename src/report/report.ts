import type { FindingReport } from '../findings/types.ts';
import type { Network } from '../network/types.ts';
import { type Show, showOf } from '../runsheet/shown.ts';
import type { FoundSettings } from '../solve/targets.ts';
import type { FlowState } from '../solve/types.ts';
import type { Spread } from '../spread/types.ts';
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
}

/** Report of a layout without cases. */
export function buildReport(input: ResultInput): Report {
  const result = buildResult(input);
  return { result, cases: [reportedCase(null, input, result)] };
}

/** Report of a layout under several cases, in the order given. */
export function buildCasesReport(
  cases: readonly { readonly name: string; readonly input: ResultInput }[],
): Report {
  const result = buildCasesResult(cases);
  return { result, cases: cases.map(({ name, input }, i) => reportedCase(name, input, result.cases[i])) };
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
