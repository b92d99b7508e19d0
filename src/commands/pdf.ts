import type { Fonts, PaperSize } from '../report/pdf/paper.ts';
import type { Report } from '../report/report.ts';

export interface PdfFileOptions {
  readonly paper?: PaperSize;
  /** Printed, and the document's creation date. */
  readonly date: Date;
  /** TrueType files with every glyph that reports use; the program's own when left out. */
  readonly fonts?: Fonts;
}

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
