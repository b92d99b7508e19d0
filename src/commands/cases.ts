import type { Analysis } from '../analyse.ts';
import { InputError } from '../errors.ts';
import { settleAccepts } from '../findings/check.ts';
import type { Network } from '../network/types.ts';
import { buildCasesReport, buildReport, type Report } from '../report/report.ts';
import type { ResultInput } from '../report/result.ts';
import { nearest } from '../runsheet/nearest.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { VERSION } from '../version.ts';

/** One case of a run sheet; the name is null for a sheet without cases. */
export interface SheetCase {
  readonly name: string | null;
  readonly sheet: RunSheet | null;
}

/**
 * The cases to look at: the sheet itself when it has none, all of them, or the one asked for.
 * Errors: InputError for a case that the sheet does not have.
 */
export function casesOf(sheet: RunSheet | null, wanted: string | undefined): readonly SheetCase[] {
  const cases = sheet?.cases ?? [];
  if (wanted !== undefined) {
    const found = cases.find(({ name }) => name === wanted);
    if (found !== undefined) return [found];
    const names = cases.map(({ name }) => name);
    const near = nearest(wanted, names);
    const meant = near === null ? 'its cases are' : `did you mean ${quote(near)}? Its cases are`;
    const hint = names.length === 0 ? 'the run sheet has no cases' : `${meant} ${names.join(', ')}`;
    throw new InputError('--case', `there is no case ${quote(wanted)}; ${hint}`);
  }
  return cases.length === 0 ? [{ name: null, sheet }] : cases;
}

/** The network of the first case, offered to the ones that follow. */
export function alikeTo(network: Network | undefined): { readonly alike?: Network } {
  return network === undefined ? {} : { alike: network };
}

/** The report of analysed cases in their order; `extra` is what a command adds to the result of each, `sheet` the whole run sheet. */
export function toReport(
  cases: readonly {
    readonly name: string | null;
    readonly analysis: Analysis;
    readonly extra?: Pick<ResultInput, 'pump' | 'spread'>;
  }[],
  layoutFile: string,
  sheet: RunSheet | null,
): Report {
  const settled = settleAccepts(cases.map(({ analysis }) => analysis.findings));
  const inputs = cases.map(({ name, analysis, extra }, i) => ({
    name,
    input: {
      tool: { name: 'rillcheck', version: VERSION },
      layoutFile,
      ...analysis,
      findings: settled[i],
      ...extra,
    },
  }));
  if (inputs.length === 1 && inputs[0].name === null) return buildReport(inputs[0].input);
  return buildCasesReport(
    inputs.map(({ name, input }) => ({ name: name ?? '', input })),
    sheet?.cases.map(({ name }) => name),
  );
}
