import { basename, dirname, join } from 'node:path';
import { writeReachesCsv, writeSegmentsCsv } from '../report/csv.ts';
import { writeJson } from '../report/json.ts';
import { cleanText, wrapText } from '../report/plain-text.ts';
import type { Report } from '../report/report.ts';
import { writeSpreadCsv } from '../report/spread-csv.ts';
import type { Io } from './io.ts';
import type { Format, LayoutOptions } from './options.ts';
import { writePdf } from './pdf.ts';
import type { Progress } from './progress.ts';
import { type InputFile, resolveIn } from './read-files.ts';
import { refuseOverwriting } from './refuse-overwriting.ts';
import type { ReportNames } from './report-names.ts';
import { type OutFile, writeFiles } from './write-files.ts';

export interface ReportPlan {
  readonly report: Report;
  readonly formats: readonly Format[];
  readonly names: ReportNames;
  /** What was read: nothing is written over it. */
  readonly inputs: readonly InputFile[];
  readonly options: Pick<LayoutOptions, 'out' | 'json' | 'detail' | 'colour' | 'paper'>;
  /** Files of the command's own, written with the reports, all or none. */
  readonly more?: readonly ShownFile[];
}

/** A file with its path as a person would write it. */
export interface ShownFile extends OutFile {
  readonly shown: string;
}

/**
 * Writes the reports asked for, and with --json the result on stdout; returns the paths written, as a person would write them. The PDF
 * and SVG writers are loaded only when needed.
 *
 * Errors: InputError when a file would be written over one that was read; WriteError when a file can't be written whole.
 */
export async function writeReports(plan: ReportPlan, io: Io, progress: Progress): Promise<readonly string[]> {
  const { report, formats, inputs, options, more = [] } = plan;
  const planned = formats.flatMap((format) =>
    filesOf(plan, format, io).map(({ name, content }) => {
      const shown = join(options.out, name);
      return { format, shown, path: resolveIn(io, shown), wayOut: WAY_OUT, content };
    }),
  );
  // before the work of making them
  await refuseOverwriting([...planned, ...more], inputs);
  const files: ShownFile[] = [];
  for (const { format, content, ...file } of planned) {
    await progress.stage(`writing ${format}`);
    files.push({ ...file, content: await content() });
  }
  files.push(...more);
  await writeFiles(files, inputs, io);
  if (options.json === true) {
    for (const chunk of inChunks(writeJson(report.result, options.detail))) await io.out(chunk);
  }
  return files.map(({ shown }) => shown);
}

const WAY_OUT = 'choose another folder with --out, or write nothing with --formats none';

/** "written to reports: culture.pdf, culture.case-seed.svg", a line end behind each folder; nothing when nothing was. */
export function writtenText(paths: readonly string[], columns: number): string {
  const names = new Map<string, string[]>();
  for (const path of paths) names.set(dirname(path), [...(names.get(dirname(path)) ?? []), basename(path)]);
  return [...names]
    .flatMap(([folder, written]) =>
      wrapText(
        cleanText(`written to ${folder === '.' ? 'this folder' : folder}: ${written.join(', ')}`),
        Math.max(40, Math.min(100, columns)),
      ),
    )
    .map((line) => `${line}\n`)
    .join('');
}

interface PlannedFile {
  readonly name: string;
  readonly content: () => OutFile['content'] | Promise<OutFile['content']>;
}

function filesOf({ report, names, options }: ReportPlan, format: Format, io: Io): PlannedFile[] {
  switch (format) {
    case 'json':
      return [{ name: names.whole('json'), content: () => writeJson(report.result, options.detail) }];
    case 'csv':
      return report.cases.flatMap(({ part: { reaches, segments, spread } }, i): PlannedFile[] => [
        { name: names.ofCase(i, 'reaches.csv'), content: () => writeReachesCsv(reaches) },
        { name: names.ofCase(i, 'segments.csv'), content: () => writeSegmentsCsv(segments) },
        ...(spread === undefined
          ? []
          : [{ name: names.ofCase(i, 'csv'), content: () => writeSpreadCsv(spread) }]),
      ]);
    case 'svg':
      return report.cases.map((one, i) => ({
        name: names.ofCase(i, 'svg'),
        content: async () => {
          const { svgPicture } = await import('../report/svg.ts');
          return [svgPicture(one, { quantity: options.colour })];
        },
      }));
    case 'pdf':
      return [
        {
          name: names.whole('pdf'),
          content: () => writePdf(report, { paper: options.paper, date: io.now }),
        },
      ];
    default:
      return format satisfies never;
  }
}

const CHUNK_CHARACTERS = 1 << 16;

function* inChunks(parts: Iterable<string>): Generator<string> {
  let chunk = '';
  for (const part of parts) {
    chunk += part;
    if (chunk.length >= CHUNK_CHARACTERS) {
      yield chunk;
      chunk = '';
    }
  }
  if (chunk !== '') yield chunk;
}
