import { joined } from '../plain-text.ts';
import { AT_FOUND_SETTINGS } from '../pump-rows.ts';
import type { Report } from '../report.ts';
import { casesLine, verdictLine } from '../verdict-line.ts';
import { writeCases } from './cases.ts';
import { writeCautions } from './cautions.ts';
import { isoDate, pageContext } from './context.ts';
import { drawingText } from './drawing-text.ts';
import { writeFindings } from './findings.ts';
import { writeFrontPage } from './front-page.ts';
import { writeHandCheck } from './hand-check.ts';
import { writeHoles } from './holes.ts';
import { writeMaps } from './maps.ts';
import { writeModel } from './model.ts';
import type { PdfOptions } from './options.ts';
import { Paper } from './paper.ts';
import { writePump } from './pump.ts';
import { writeReaches } from './reaches.ts';
import { writeRunSheet } from './run-sheet.ts';
import { writeSegments } from './segments.ts';
import { writeSpread } from './spread.ts';

/**
 * The document to sign: PDF 1.7, tagged, one embedded font. The same report, options and Node version give the same bytes.
 * Time and size are bounded: of large networks the tables hold the first part and say where the rest is.
 */
export function writePdf(report: Report, options: PdfOptions): Promise<Uint8Array> {
  const { result, cases } = report;
  const { sheet } = cases[0].run;
  const creator = `${result.tool.name} ${result.tool.version}`;
  const title = sheet?.title ?? result.layout.file;
  const subject = `${subjectOf(cases)} of ${result.layout.file}`;
  const paper = new Paper(options, { title, subject, creator });
  const contexts = cases.map((one) => pageContext(paper, report, one, options.date));
  writeCases(contexts);
  for (const context of contexts) {
    writeFrontPage(context);
    writePump(context);
    writeSpread(context);
    writeFindings(context);
    writeMaps(context);
    writeReaches(context);
    writeSegments(context);
    writeHandCheck(context);
  }
  const [first] = contexts;
  writeHoles(first);
  writeModel(first);
  writeCautions(first);
  writeRunSheet(first);
  return paper.finish(headLine(report, title), (page, pages) => [
    [
      `${result.layout.file} ${result.layout.sha256.slice(0, 12)}`,
      result.run_sheet === null
        ? 'no run sheet'
        : `${result.run_sheet.file} ${result.run_sheet.sha256.slice(0, 12)}`,
      creator,
      isoDate(options.date),
    ].join('  ·  '),
    `page ${page} of ${pages}`,
  ]);
}

function subjectOf(cases: Report['cases']): string {
  if (cases.some(({ pump }) => pump !== undefined)) return 'Pump settings';
  return cases.some(({ spread }) => spread !== undefined) ? 'Spread' : 'Check';
}

function headLine(report: Report, title: string): string {
  const { result, cases } = report;
  const { sheet } = cases[0].run;
  const drawing = sheet === null ? '' : drawingText(sheet.drawing);
  const verdict = 'cases' in result ? casesLine(report) : verdictLine(result.verdict, result.counts);
  const settings = cases.some(({ pump }) => pump !== undefined) ? AT_FOUND_SETTINGS : '';
  return joined([title, drawing, verdict, settings], '  ·  ');
}
