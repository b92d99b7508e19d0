import { embeddedFont, type Glyph, type GlyphRun } from './embedded-font.ts';

/**
 * A short cut past the shaping of text that needs none. Shaping every number of a long table through the font's substitution and
 * positioning tables took most of the time of writing a document (measured: 0.9 s of 1.3 s for 600 table rows); Latin, Greek and
 * symbols are as legible glyph by glyph, each at its own advance, without kerning or ligatures. What this lays out is then exactly
 * as wide as the sum of its advances. Scripts that join or turn letters still go through the shaper.
 */

/** Makes the document's current font lay out plain text by itself. Once per font. */
export function layOutPlainly(doc: PDFKit.PDFDocument): void {
  const embedded = embeddedFont(doc);
  const shaped = embedded.layout.bind(embedded);
  const known = new Map<string, Placed>();
  const placed = (character: string): Placed => {
    const glyph = embedded.font.glyphForCodePoint(character.codePointAt(0) ?? 0);
    const advance = glyph.advanceWidth * embedded.scale;
    const position = { xAdvance: advance, yAdvance: 0, xOffset: 0, yOffset: 0, advanceWidth: advance };
    const entry = { glyph, position };
    known.set(character, entry);
    return entry;
  };
  embedded.layout = (text, features, onlyWidth) => {
    if (!isPlain(text)) return shaped(text, features, onlyWidth);
    const glyphs: Glyph[] = [];
    const positions: GlyphRun['positions'][number][] = [];
    let advanceWidth = 0;
    for (const character of text) {
      const { glyph, position } = known.get(character) ?? placed(character);
      glyphs.push(glyph);
      positions.push(position);
      advanceWidth += position.advanceWidth;
    }
    return { glyphs, positions, advanceWidth };
  };
}

interface Placed {
  readonly glyph: Glyph;
  readonly position: GlyphRun['positions'][number];
}

/** Latin without combining marks, Greek, Cyrillic, punctuation, arrows, mathematics: one glyph a character, left to right. */
function isPlain(text: string): boolean {
  return /^[\u0020-\u02FF\u0370-\u0482\u048A-\u052F\u1E00-\u1EFF\u2010-\u2027\u2030-\u205E\u2070-\u20BF\u2100-\u2BFF\uFFFD]*$/.test(
    text,
  );
}
