import { isAbsolute, join } from 'node:path';
import { writeReachesCsv, writeSegmentsCsv } from '../report/csv.ts';
import { writeJson } from '../report/json.ts';
import type { Report, ReportedCase } from '../report/report.ts';
import { writeSpreadCsv } from '../report/spread-csv.ts';
import type { Io } from './io.ts';
import type { CheckOptions, Format } from './options.ts';
import type { Progress } from './progress.ts';
import { type OutFile, writeFiles } from './write-files.ts';

/**
 * Writes the reports asked for, and with --json the result on stdout. The PDF and SVG writers are loaded only when needed.
 *
 * Errors: WriteError when a file can't be written whole.
 */
export async function writeReports(
  report: Report,
  formats: readonly Format[],
  name: string,
  options: Pick<CheckOptions, 'out' | 'json' | 'detail' | 'colour' | 'paper'>,
  io: Io,
  progress: Progress,
): Promise<readonly string[]> {
  const files: OutFile[] = [];
  for (const format of formats) {
    await progress.stage(`writing ${format}`);
    files.push(...(await toFiles(report, format, name, options, io)));
  }
  const written =
    files.length === 0
      ? []
      : await writeFiles(isAbsolute(options.out) ? options.out : join(io.cwd, options.out), files, io);
  if (options.json === true) {
    for (const chunk of inChunks(writeJson(report.result, options.detail))) await io.out(chunk);
  }
  return written;
}

async function toFiles(
  report: Report,
  format: Format,
  name: string,
  options: Pick<CheckOptions, 'detail' | 'colour' | 'paper'>,
  io: Io,
): Promise<OutFile[]> {
  switch (format) {
    case 'json':
      return [{ name: `${name}.json`, content: writeJson(report.result, options.detail) }];
    case 'csv': {
      const names = caseFileNames(name, report.cases);
      return report.cases.flatMap((one, i) => [
        { name: `${names[i]}.reaches.csv`, content: writeReachesCsv(one.part.reaches) },
        { name: `${names[i]}.segments.csv`, content: writeSegmentsCsv(one.part.segments) },
        ...(one.part.spread === undefined
          ? []
          : [{ name: `${names[i]}.spread.csv`, content: writeSpreadCsv(one.part.spread) }]),
      ]);
    }
    case 'svg': {
      const { svgPicture } = await import('../report/svg.ts');
      const names = caseFileNames(name, report.cases);
      return report.cases.map((one, i) => ({
        name: `${names[i]}.svg`,
        content: [svgPicture(one, { quantity: options.colour })],
      }));
    }
    case 'pdf': {
      const [{ writePdf }, { readFonts }] = await Promise.all([
        import('../report/pdf/document.ts'),
        import('./fonts.ts'),
      ]);
      const content = await writePdf(report, {
        fonts: await readFonts(),
        paper: options.paper,
        date: io.now,
      });
      return [{ name: `${name}.pdf`, content }];
    }
    default:
      return format satisfies never;
  }
}

/**
 * One picture and table a case: `culture.seed.svg`. A case name is data, so only its harmless characters name a file; names
 * that come out alike, also to a file system that does not tell upper from lower case, are numbered.
 */
export function caseFileNames(name: string, cases: readonly Pick<ReportedCase, 'name'>[]): readonly string[] {
  const taken = new Set<string>();
  return cases.map(({ name: caseText }) => {
    if (caseText === null) return name;
    const own = `${name}.${caseText.replace(/[^\p{L}\p{N}_-]+/gu, '_').slice(0, MAX_CASE_CHARACTERS)}`;
    let free = own;
    for (let i = 2; taken.has(free.toLowerCase()); i++) free = `${own}-${i}`;
    taken.add(free.toLowerCase());
    return free;
  });
}

/** A file name may have 255 bytes in all, and a letter up to four. */
const MAX_CASE_CHARACTERS = 40;

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
