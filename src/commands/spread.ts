import { basename, dirname, extname, join } from 'node:path';
import { performance } from 'node:perf_hooks';
import { setImmediate } from 'node:timers/promises';
import { type Analysis, type AnalysisInput, analyse, type OnStage } from '../analyse.ts';
import { InputError } from '../errors.ts';
import { layOut } from '../layout/layout.ts';
import type { Report } from '../report/report.ts';
import { writeSamplesCsv } from '../report/spread-csv.ts';
import { spreadPartOf } from '../report/spread-part.ts';
import { spreadText } from '../report/spread-text.ts';
import { terminalSummary } from '../report/terminal.ts';
import { parseRunSheet } from '../runsheet/parse.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet, Tolerances } from '../runsheet/types.ts';
import { type Pace, type SpreadOptions, spreadOf, whyNoSpread } from '../spread/spread.ts';
import type { Spread } from '../spread/types.ts';
import { readSvg } from '../svg/read.ts';
import { casesOf, type SheetCase, toReport } from './cases.ts';
import { EXIT_HOLD, EXIT_READY } from './check.ts';
import { terminalOptions } from './colour.ts';
import { type DrawProgress, drawProgress } from './draw-progress.ts';
import type { Io } from './io.ts';
import { type CheckOptions, type Format, formatsOf } from './options.ts';
import { type Progress, stageProgress } from './progress.ts';
import {
  defaultRunSheet,
  type InputFile,
  readLayout,
  readRunSheet,
  reportName,
  resolveIn,
} from './read-files.ts';
import { reportNames } from './report-names.ts';
import { type ShownFile, writeReports, writtenText } from './write-reports.ts';

export interface SpreadCommandOptions extends CheckOptions {
  readonly draws: string;
  readonly seed: string;
  readonly samples?: string;
}

export const EXIT_STOPPED = 130;
const MOST_DRAWS = 1_000_000;

/**
 * `rillcheck spread`: a check, and how far the run sheet's tolerances move it. Ctrl-C while draws are made ends the drawing and not
 * the work: what was drawn is reported, marked as such, and the exit code is 130.
 */
export async function spread(layoutPath: string, options: SpreadCommandOptions, io: Io): Promise<number> {
  const formats = formatsOf(options);
  const draws = wholeNumber('--draws', options.draws, 2, MOST_DRAWS);
  const seed = wholeNumber('--seed', options.seed, 0, Number.MAX_SAFE_INTEGER);
  const quiet = options.quiet === true || options.json === true;
  const progress = stageProgress(io, quiet);
  try {
    await progress.stage('reading');
    const layoutFile = await readLayout(layoutPath, io);
    const sheetFile = await readRunSheet(layoutPath, options.run, io);
    if (sheetFile === null) throw noRunSheet(layoutPath);
    const layout = layOut(readSvg(layoutFile.text, layoutFile.shown), layoutFile.shown);
    const wholeSheet = parseRunSheet(sheetFile.text, sheetFile.shown);
    const cases = casesOf(wholeSheet, options.case).map((one) => withTolerances(one, sheetFile.shown));
    const input = { layout, file: layoutFile.name, layoutSha256: layoutFile.sha256 };
    const made: SpreadCase[] = [];
    for (const one of cases) made.push(await spreadCase(one, input, { draws, seed }, io, quiet, progress));
    const isStopped = made.some(({ spread: { draws: drawn, asked } }) => drawn < asked);
    const report = toSpreadReport(made, layoutFile.name, wholeSheet);
    // what was drawn before Ctrl-C is written all the same
    await writeAll(
      report,
      formats,
      layoutPath,
      [layoutFile, sheetFile],
      options,
      isStopped ? { ...io, isInterrupted: () => false } : io,
    );
    if (isStopped) {
      io.err('rillcheck: stopped before the end; the results are of the draws made so far, and say so\n');
      return EXIT_STOPPED;
    }
    return report.result.verdict === 'ready' ? EXIT_READY : EXIT_HOLD;
  } finally {
    progress.done();
  }
}

async function writeAll(
  report: Report,
  formats: readonly Format[],
  layoutPath: string,
  inputs: readonly InputFile[],
  options: SpreadCommandOptions,
  io: Io,
): Promise<void> {
  const progress = stageProgress(io, options.quiet === true || options.json === true);
  const names = reportNames(reportName(layoutPath, options.run), 'spread', report);
  const more = options.samples === undefined ? [] : sampleFiles(report, options.samples, io);
  let written: readonly string[];
  try {
    written = await writeReports({ report, formats, names, inputs, options, more }, io, progress);
  } finally {
    progress.done();
  }
  if (options.json === true) return;
  const terminal = terminalOptions(options, io);
  if (!terminal.quiet) await io.out(spreadText(report, terminal.columns));
  await io.out(terminalSummary(report, terminal));
  if (!terminal.quiet) await io.out(writtenText(written, terminal.columns));
}

/** One case of the run sheet that says what may vary. */
interface VaryingCase {
  readonly name: string | null;
  readonly sheet: RunSheet;
  readonly tolerances: Tolerances;
  /** The run sheet's file. */
  readonly file: string;
}

async function spreadCase(
  one: VaryingCase,
  input: Omit<AnalysisInput, 'sheet'>,
  options: SpreadOptions,
  io: Io,
  quiet: boolean,
  progress: Progress,
): Promise<SpreadCase> {
  const { name, sheet, tolerances } = one;
  const isStopped = io.isInterrupted();
  const analysis = await analyse({ ...input, sheet }, stages(progress, one, isStopped));
  refuseNothingToVary(analysis, one);
  progress.done();
  // a case that is reached after Ctrl-C gets its first-order numbers and no draws
  const shown = isStopped ? null : drawProgress(io, quiet, options.draws, name);
  try {
    return {
      name,
      analysis,
      spread: await spreadOf(analysis, tolerances, options, paceOf(io, shown)),
    };
  } finally {
    shown?.done();
  }
}

interface SpreadCase {
  readonly name: string | null;
  readonly analysis: Analysis;
  readonly spread: Spread;
}

function wholeNumber(option: string, text: string, least: number, most: number): number {
  const value = /^\d+$/.test(text.trim()) ? Number(text) : Number.NaN;
  if (value >= least && value <= most) return value;
  throw new InputError(
    option,
    `${quote(text)} is not a whole number from ${least} to ${most}; write for example ${option} ${option === '--seed' ? 1 : 10000}`,
  );
}

function withTolerances({ name, sheet }: SheetCase, file: string): VaryingCase {
  const tolerances = sheet?.tolerances ?? null;
  if (sheet !== null && tolerances !== null) return { name, sheet, tolerances, file };
  throw new InputError(file, `tolerances: there are none${inCase(name)}; ${EXAMPLE}`);
}

function refuseNothingToVary(analysis: Analysis, { name, sheet, tolerances, file }: VaryingCase): void {
  const idle = whyNoSpread(analysis, tolerances);
  if (idle === null) return;
  const line = sheet.lineOf(['tolerances']);
  throw new InputError(
    line === null ? file : `${file}:${line}`,
    `tolerances: nothing in them moves anything on this chip${inCase(name)}${idle.length === 0 ? '' : ` (${idle.slice(0, 3).join('; ')})`}; ${EXAMPLE}`,
  );
}

function inCase(name: string | null): string {
  return name === null ? '' : ` in case ${quote(name)}`;
}

const EXAMPLE = 'write for example "tolerances: { depth: 5 %, width: 2 um, temperature: 1 degC }"';

function noRunSheet(layoutPath: string): InputError {
  return new InputError(
    defaultRunSheet(layoutPath),
    `there is no such run sheet; spread needs one with tolerances: ${EXAMPLE}, or write a first one with: rillcheck draft LAYOUT`,
  );
}

/** Stages of a case; after Ctrl-C they no longer stop at it. */
function stages(progress: Progress, { name }: VaryingCase, isStopped: boolean): OnStage {
  if (isStopped) return async () => {};
  return (stage) => progress.stage(name === null ? stage : `${name}: ${stage}`);
}

/** Signals are handled, and the bar is drawn, a few times a second. */
const REST_EVERY_MS = 50;

/** @param shown null when the user has stopped it already */
function paceOf(io: Io, shown: DrawProgress | null): Pace {
  if (shown === null) return { due: () => true, rest: async () => 'stop' };
  let next = performance.now() + REST_EVERY_MS;
  return {
    due: () => performance.now() >= next,
    rest: async (done) => {
      shown.update(done);
      await setImmediate();
      next = performance.now() + REST_EVERY_MS;
      return io.isInterrupted() ? 'stop' : 'go on';
    },
  };
}

function toSpreadReport(cases: readonly SpreadCase[], layoutFile: string, wholeSheet: RunSheet): Report {
  const report = toReport(
    cases.map(({ name, analysis, spread: made }) => ({
      name,
      analysis,
      extra: { spread: spreadPartOf(made) },
    })),
    layoutFile,
    wholeSheet,
  );
  return { ...report, cases: report.cases.map((one, i) => ({ ...one, spread: cases[i].spread })) };
}

/** One file, or one for each case with its name before the ending. */
function sampleFiles(report: Report, path: string, io: Io): readonly ShownFile[] {
  const extension = extname(path);
  const names = reportNames(basename(path, extension), null, report);
  return report.cases.flatMap((one, i): ShownFile[] => {
    if (one.spread === undefined) return [];
    const name = names.ofCase(i, extension.slice(1)).replace(/\.$/, '');
    const shown = join(dirname(path), name);
    return [
      {
        shown,
        path: resolveIn(io, shown),
        content: writeSamplesCsv(one.spread),
        wayOut: 'name another file with --samples',
      },
    ];
  });
}
