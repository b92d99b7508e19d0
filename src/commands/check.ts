import { type Analysis, analyse } from '../analyse.ts';
import { InputError } from '../errors.ts';
import { layOut } from '../layout/layout.ts';
import { buildCasesReport, buildReport, type Report } from '../report/report.ts';
import { terminalSummary } from '../report/terminal.ts';
import { nearest } from '../runsheet/nearest.ts';
import { parseRunSheet } from '../runsheet/parse.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { readSvg } from '../svg/read.ts';
import { VERSION } from '../version.ts';
import { terminalOptions } from './colour.ts';
import type { Io } from './io.ts';
import { type CheckOptions, formatsOf } from './options.ts';
import { stageProgress } from './progress.ts';
import { readLayout, readRunSheet, reportName } from './read-files.ts';
import { writeReports } from './write-reports.ts';

export const EXIT_READY = 0;
export const EXIT_HOLD = 1;

/** `rillcheck check`: read, compute, write; returns the exit code. */
export async function check(layoutPath: string, options: CheckOptions, io: Io): Promise<number> {
  const formats = formatsOf(options);
  const progress = stageProgress(io, options.quiet === true || options.json === true);
  try {
    await progress.stage('reading');
    const layoutFile = await readLayout(layoutPath, io);
    const sheetFile = await readRunSheet(layoutPath, options.run, io);
    const sheet = sheetFile === null ? null : parseRunSheet(sheetFile.text, sheetFile.shown);
    const layout = layOut(readSvg(layoutFile.text, layoutFile.shown), layoutFile.shown);
    const cases: { name: string | null; analysis: Analysis }[] = [];
    for (const { name, sheet: caseSheet } of casesOf(sheet, options.case)) {
      cases.push({
        name,
        analysis: await analyse(
          { layout, sheet: caseSheet, file: layoutFile.name, layoutSha256: layoutFile.sha256 },
          (stage) => progress.stage(name === null ? stage : `${name}: ${stage}`),
        ),
      });
    }
    const report = toReport(cases, layoutFile.name);
    await writeReports(report, formats, reportName(layoutPath, options.run), options, io, progress);
    progress.done();
    if (options.json !== true) await io.out(terminalSummary(report, terminalOptions(options, io)));
    return report.result.verdict === 'ready' ? EXIT_READY : EXIT_HOLD;
  } finally {
    progress.done();
  }
}

/** The cases to look at: the sheet itself without any, all of them, or the one asked for. */
function casesOf(
  sheet: RunSheet | null,
  wanted: string | undefined,
): { name: string | null; sheet: RunSheet | null }[] {
  const cases = sheet?.cases ?? [];
  if (wanted !== undefined) {
    const found = cases.find(({ name }) => name === wanted);
    if (found !== undefined) return [found];
    const names = cases.map(({ name }) => name);
    const near = nearest(wanted, names);
    const hint =
      names.length === 0
        ? 'the run sheet has no cases'
        : `did you mean "${near ?? names[0]}"? Its cases are ${names.join(', ')}`;
    throw new InputError('--case', `there is no case "${wanted}"; ${hint}`);
  }
  return cases.length === 0 ? [{ name: null, sheet }] : [...cases];
}

function toReport(cases: readonly { name: string | null; analysis: Analysis }[], layoutFile: string): Report {
  const inputs = cases.map(({ name, analysis }) => ({
    name,
    input: { tool: { name: 'rillcheck', version: VERSION }, layoutFile, ...analysis },
  }));
  if (inputs.length === 1 && inputs[0].name === null) return buildReport(inputs[0].input);
  return buildCasesReport(inputs.map(({ name, input }) => ({ name: name ?? '', input })));
}
