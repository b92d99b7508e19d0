import { type Analysis, analyse } from '../analyse.ts';
import { layOut } from '../layout/layout.ts';
import { terminalSummary } from '../report/terminal.ts';
import { parseRunSheet } from '../runsheet/parse.ts';
import { readSvg } from '../svg/read.ts';
import { alikeTo, casesOf, toReport } from './cases.ts';
import { terminalOptions } from './colour.ts';
import type { Io } from './io.ts';
import { type CheckOptions, formatsOf } from './options.ts';
import { stageProgress } from './progress.ts';
import { readLayout, readRunSheet, reportName } from './read-files.ts';
import { reportNames } from './report-names.ts';
import { writeReports, writtenText } from './write-reports.ts';

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
          {
            layout,
            sheet: caseSheet,
            file: layoutFile.name,
            layoutSha256: layoutFile.sha256,
            ...alikeTo(cases[0]?.analysis.network),
          },
          (stage) => progress.stage(name === null ? stage : `${name}: ${stage}`),
        ),
      });
    }
    const report = toReport(cases, layoutFile.name, sheet);
    const names = reportNames(reportName(layoutPath, options.run), null, report);
    const inputs = [layoutFile, ...(sheetFile === null ? [] : [sheetFile])];
    const written = await writeReports({ report, formats, names, inputs, options }, io, progress);
    progress.done();
    if (options.json !== true) {
      const terminal = terminalOptions(options, io);
      await io.out(terminalSummary(report, terminal));
      if (!terminal.quiet) await io.out(writtenText(written, terminal.columns));
    }
    return report.result.verdict === 'ready' ? EXIT_READY : EXIT_HOLD;
  } finally {
    progress.done();
  }
}
