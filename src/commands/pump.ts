import { type Analysis, type AnalysisInput, analyse, analysePump, type OnStage } from '../analyse.ts';
import { InputError } from '../errors.ts';
import { layOut } from '../layout/layout.ts';
import { pumpPartOf } from '../report/pump-part.ts';
import { pumpText } from '../report/pump-text.ts';
import type { Report } from '../report/report.ts';
import { terminalSummary } from '../report/terminal.ts';
import { parseRunSheet } from '../runsheet/parse.ts';
import type { FoundSettings } from '../solve/targets.ts';
import { readSvg } from '../svg/read.ts';
import { alikeTo, casesOf, type SheetCase, toReport } from './cases.ts';
import { EXIT_HOLD, EXIT_READY } from './check.ts';
import { terminalOptions } from './colour.ts';
import type { Io } from './io.ts';
import { type CheckOptions, formatsOf } from './options.ts';
import { stageProgress } from './progress.ts';
import { defaultRunSheet, readLayout, readRunSheet, reportName } from './read-files.ts';
import { writeReports } from './write-reports.ts';

/** `rillcheck pump`: the settings that meet the run sheet's targets, and everything that a check says at those settings. */
export async function pump(layoutPath: string, options: CheckOptions, io: Io): Promise<number> {
  const formats = formatsOf(options);
  const progress = stageProgress(io, options.quiet === true || options.json === true);
  try {
    await progress.stage('reading');
    const layoutFile = await readLayout(layoutPath, io);
    const sheetFile = await readRunSheet(layoutPath, options.run, io);
    if (sheetFile === null) throw noRunSheet(layoutPath);
    const layout = layOut(readSvg(layoutFile.text, layoutFile.shown), layoutFile.shown);
    const cases = casesOf(parseRunSheet(sheetFile.text, sheetFile.shown), options.case);
    refuseNoTargets(cases, sheetFile.shown);
    const analysed: PumpedCase[] = [];
    for (const { name, sheet } of cases) {
      const input = {
        layout,
        sheet,
        file: layoutFile.name,
        layoutSha256: layoutFile.sha256,
        ...alikeTo(analysed[0]?.analysis.network),
      };
      const onStage: OnStage = (stage) => progress.stage(name === null ? stage : `${name}: ${stage}`);
      analysed.push({ name, ...(await analyseCase(input, onStage)) });
    }
    const report = toPumpReport(analysed, layoutFile.name);
    await writeReports(report, formats, reportName(layoutPath, options.run), options, io, progress);
    progress.done();
    if (options.json !== true) {
      const terminal = terminalOptions(options, io);
      if (!terminal.quiet) await io.out(pumpText(report, terminal.columns));
      await io.out(terminalSummary(report, terminal));
    }
    return report.result.verdict === 'ready' ? EXIT_READY : EXIT_HOLD;
  } finally {
    progress.done();
  }
}

interface Pumped {
  readonly analysis: Analysis;
  /** null for a case without targets, which is computed as it stands. */
  readonly settings: FoundSettings | null;
}

interface PumpedCase extends Pumped {
  readonly name: string | null;
}

async function analyseCase(input: AnalysisInput, onStage: OnStage): Promise<Pumped> {
  if (input.sheet === null || input.sheet.targets.length === 0)
    return { analysis: await analyse(input, onStage), settings: null };
  return analysePump(input, onStage);
}

function toPumpReport(cases: readonly PumpedCase[], layoutFile: string): Report {
  const report = toReport(
    cases.map(({ name, analysis, settings }) => ({
      name,
      analysis,
      extra: settings === null ? {} : { pump: pumpPartOf(analysis.network, settings) },
    })),
    layoutFile,
  );
  const reported = report.cases.map((one, i) => {
    const { settings } = cases[i];
    return settings === null ? one : { ...one, pump: settings };
  });
  return { ...report, cases: reported };
}

const EXAMPLE = '- { channel: lane-1, wall_shear: 0.3 Pa, by: feed }';

function refuseNoTargets(cases: readonly SheetCase[], file: string): void {
  if (cases.some(({ sheet }) => sheet !== null && sheet.targets.length > 0)) return;
  const none = cases.some(({ sheet }) => sheet !== null && sheet.concentrationTargets.length > 0)
    ? 'there are only concentrations, which are not computed yet'
    : 'there are none to find settings for';
  throw new InputError(file, `targets: ${none}; write under targets for example "${EXAMPLE}"`);
}

function noRunSheet(layoutPath: string): InputError {
  return new InputError(
    defaultRunSheet(layoutPath),
    'there is no such run sheet; pump needs one with targets: write one with: rillcheck draft LAYOUT',
  );
}
