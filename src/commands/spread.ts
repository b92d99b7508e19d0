import { basename, dirname, extname, join } from 'node:path';
import { performance } from 'node:perf_hooks';
import { setImmediate } from 'node:timers/promises';
import { TOLERANCES_EXAMPLE } from '../check-layout.ts';
import { InputError } from '../errors.ts';
import type { Report } from '../report/report.ts';
import { writeSamplesCsv } from '../report/spread-csv.ts';
import { spreadText } from '../report/spread-text.ts';
import { quote } from '../runsheet/quote.ts';
import type { Pace } from '../spread/spread.ts';
import { type DrawProgress, drawProgress } from './draw-progress.ts';
import { EXIT } from './exit-codes.ts';
import type { Io } from './io.ts';
import type { LayoutOptions } from './options.ts';
import { stageProgress } from './progress.ts';
import { resolveIn } from './read-files.ts';
import { reportLayout, verdictCode } from './report-layout.ts';
import { reportNames } from './report-names.ts';
import type { ShownFile } from './write-reports.ts';

export interface SpreadOptions extends LayoutOptions {
  readonly draws: string;
  readonly seed: string;
  readonly samples?: string;
}

const MOST_DRAWS = 1_000_000;

/**
 * `rillcheck spread`: a check, and how far the run sheet's tolerances move it. Ctrl-C while draws are made ends the drawing and not
 * the work: what was drawn is reported, marked as such, and the exit code is 130.
 */
export async function spread(layoutPath: string, options: SpreadOptions, io: Io): Promise<number> {
  const draws = wholeNumber('--draws', options.draws, 2, MOST_DRAWS);
  const seed = wholeNumber('--seed', options.seed, 0, Number.MAX_SAFE_INTEGER);
  const drawing = drawingOf(io, options, draws);
  const { samples } = options;
  try {
    const report = await reportLayout(layoutPath, options, drawing.io, {
      command: 'spread',
      options: { spread: { draws, seed, paceOf: drawing.paceOf }, onStage: drawing.onStage },
      noRunSheet: `there is no such run sheet; spread needs one with tolerances: ${TOLERANCES_EXAMPLE}, or write a first one with: rillcheck draft LAYOUT`,
      text: spreadText,
      ...(samples === undefined ? {} : { files: (made) => sampleFiles(made, samples, io) }),
    });
    if (report.cases.every(({ spread: made }) => made === undefined || made.draws === made.asked))
      return verdictCode(report);
    io.err('rillcheck: stopped before the end; the results are of the draws made so far, and say so\n');
    return EXIT.interrupted;
  } finally {
    drawing.end();
  }
}

function wholeNumber(option: string, text: string, least: number, most: number): number {
  const value = /^\d+$/.test(text.trim()) ? Number(text) : Number.NaN;
  if (value >= least && value <= most) return value;
  throw new InputError(
    option,
    `${quote(text)} is not a whole number from ${least} to ${most}; write for example ${option} ${option === '--seed' ? 1 : 10000}`,
  );
}

/** What is shown while draws are made, and what Ctrl-C then does: it ends the draws, and no longer the work. */
interface Drawing {
  /** As given, but that a Ctrl-C that ended draws interrupts nothing after them. */
  readonly io: Io;
  readonly onStage: (stage: string, caseName: string | null) => Promise<void>;
  readonly paceOf: (caseName: string | null) => Pace;
  /** Takes the bar away. */
  readonly end: () => void;
}

/** Signals are handled, and the bar is drawn, a few times a second. */
const REST_EVERY_MS = 50;

function drawingOf(io: Io, options: SpreadOptions, draws: number): Drawing {
  const quiet = options.quiet === true || options.json === true;
  let isStopped = false;
  let shown: DrawProgress | null = null;
  const own: Io = { ...io, isInterrupted: () => !isStopped && io.isInterrupted() };
  const progress = stageProgress(own, quiet);
  const end = (): void => {
    progress.done();
    shown?.done();
    shown = null;
  };
  return {
    io: own,
    end,
    onStage: async (stage, name) => {
      end();
      // a case that is reached after Ctrl-C gets its first-order numbers and no draws
      if (!isStopped) await progress.stage(name === null ? stage : `${name}: ${stage}`);
    },
    paceOf: (name) => {
      end();
      if (isStopped) return { due: () => true, rest: async () => 'stop' };
      const bar = drawProgress(io, quiet, draws, name);
      shown = bar;
      let next = performance.now() + REST_EVERY_MS;
      return {
        due: () => performance.now() >= next,
        end,
        rest: async (done) => {
          bar.update(done);
          await setImmediate();
          next = performance.now() + REST_EVERY_MS;
          isStopped = io.isInterrupted();
          return isStopped ? 'stop' : 'go on';
        },
      };
    },
  };
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
