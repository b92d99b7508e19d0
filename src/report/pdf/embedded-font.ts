/** The part of pdfkit 0.20's embedded font that is used here; its types leave it out. */
export interface EmbeddedFont {
  readonly font: {
    readonly glyphForCodePoint: (codePoint: number) => Glyph;
    readonly hasGlyphForCodePoint: (codePoint: number) => boolean;
  };
  readonly scale: number;
  layout: (text: string, features?: unknown, onlyWidth?: boolean) => GlyphRun;
}

export interface Glyph {
  readonly advanceWidth: number;
}

export interface GlyphRun {
  readonly glyphs: readonly Glyph[];
  readonly positions: readonly {
    readonly xAdvance: number;
    readonly yAdvance: number;
    readonly xOffset: number;
    readonly yOffset: number;
    readonly advanceWidth: number;
  }[];
  readonly advanceWidth: number;
}

/** The document's current font. */
export function embeddedFont(doc: PDFKit.PDFDocument): EmbeddedFont {
  // private in pdfkit and missing in its types; tests pin the glyphs that come of it
  return (doc as unknown as { readonly _font: EmbeddedFont })._font;
}
