import type { PdfOptions } from '../report/pdf/options.ts';
import type { Report } from '../report/report.ts';

/** Without fonts the program's own; without a paper size A4. */
export type PdfFileOptions = Partial<PdfOptions> & Pick<PdfOptions, 'date'>;

/** The report to sign, as the bytes of a PDF. The writer and its fonts are loaded when it is asked for. */
export async function writePdf(
  report: Report,
  { paper = 'a4', date, fonts }: PdfFileOptions,
): Promise<Uint8Array> {
  const [document, { readFonts }] = await Promise.all([
    import('../report/pdf/document.ts'),
    import('./fonts.ts'),
  ]);
  return document.writePdf(report, { fonts: fonts ?? (await readFonts()), paper, date });
}
