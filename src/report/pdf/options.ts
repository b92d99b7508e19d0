export type PaperSize = 'a4' | 'letter';

/** TrueType files of the one embedded font, with every glyph that the pages use. */
export interface Fonts {
  readonly regular: Uint8Array;
  readonly bold: Uint8Array;
}

export interface PdfOptions {
  readonly fonts: Fonts;
  readonly paper: PaperSize;
  /** The one clock: printed, and the document's creation date. */
  readonly date: Date;
}
