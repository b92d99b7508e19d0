import { type CheckLayoutOptions, checkLayout } from '../check-layout.ts';
import { InputError } from '../errors.ts';
import type { Report } from '../report/report.ts';
import { terminalSummary } from '../report/terminal.ts';
import { terminalOptions } from './colour.ts';
import { EXIT } from './exit-codes.ts';
import type { Io } from './io.ts';
import { formatsOf, type LayoutOptions } from './options.ts';
import { stageProgress } from './progress.ts';
import { defaultRunSheet, readLayout, readRunSheet, reportName } from './read-files.ts';
import { reportNames } from './report-names.ts';
import { type ShownFile, writeReports, writtenText } from './write-reports.ts';

/** What a command adds to a check. */
interface Extra {
  /** In the names of its reports. */
  readonly command: 'pump' | 'spread';
  readonly options: Pick<CheckLayoutOptions, 'pump' | 'spread' | 'onStage'>;
  /** Said where there is no run sheet. */
  readonly noRunSheet: string;
  /** What it prints above the summary of the check. */
  readonly text: (report: Report, columns: number) => string;
  /** Files of its own, written with the reports, all or none. */
  readonly files?: (report: Report) => readonly ShownFile[];
}

/**
 * Reads, computes and writes: all of check, and what pump and spread have in common with it.
 * @returns the report; what its verdict says goes into the exit code (`verdictCode`)
 * Errors: InputError, WriteError, Interrupted as the parts.
 */
export async function reportLayout(
  layoutPath: string,
  options: LayoutOptions,
  io: Io,
  extra?: Extra,
): Promise<Report> {
  const formats = formatsOf(options);
  const progress = stageProgress(io, options.quiet === true || options.json === true);
  try {
    await progress.stage('reading');
    const layout = await readLayout(layoutPath, io);
    const runSheet = await readRunSheet(layoutPath, options.run, io);
    if (runSheet === null && extra !== undefined)
      throw new InputError(defaultRunSheet(layoutPath), extra.noRunSheet);
    const report = await checkLayout(
      { layout, runSheet },
      {
        ...(options.case === undefined ? {} : { case: options.case }),
        onStage: (stage, name) => progress.stage(name === null ? stage : `${name}: ${stage}`),
        ...extra?.options,
      },
    );
    const names = reportNames(reportName(layoutPath, options.run), extra?.command ?? null, report);
    const inputs = runSheet === null ? [layout] : [layout, runSheet];
    const written = await writeReports(
      { report, formats, names, inputs, options, more: extra?.files?.(report) ?? [] },
      io,
      progress,
    );
    progress.done();
    if (options.json !== true) {
      const terminal = terminalOptions(options, io);
      if (!terminal.quiet && extra !== undefined) await io.out(extra.text(report, terminal.columns));
      await io.out(terminalSummary(report, terminal));
      if (!terminal.quiet) await io.out(writtenText(written, terminal.columns));
    }
    return report;
  } finally {
    progress.done();
  }
}

export function verdictCode({ result }: Report): number {
  return result.verdict === 'ready' ? EXIT.ready : EXIT.hold;
}
