import PDFDocument from 'pdfkit';
import { describe, expect, test } from 'vitest';
import { layOutPlainly } from '../../src/report/pdf/plain-layout.ts';
import { fonts } from './fonts.ts';

interface Layout {
  readonly glyphs: readonly { readonly id: number }[];
  readonly advanceWidth: number;
}

function layouts(plainly: boolean): (text: string) => Layout {
  const doc = new PDFDocument({ autoFirstPage: false, font: '' });
  // pdfkit's own type wants a Buffer-like source; a Uint8Array is what it reads
  doc.registerFont('regular', fonts.regular as PDFKit.Mixins.PDFFontSource);
  doc.font('regular');
  if (plainly) layOutPlainly(doc);
  // the layout of the current font is private in pdfkit
  const { _font: font } = doc as unknown as { readonly _font: { readonly layout: (text: string) => Layout } };
  return (text) => font.layout(text);
}

describe('the short cut past the shaper', () => {
  const plain = layouts(true);
  const shaped = layouts(false);

  test.each([
    '0123456789.-e',
    'µL/min',
    '10¹² Pa s/m³',
    'x₁ → y₂',
    '–',
    'Σ tanh(nπl/2s)/n⁵',
    '✗ lane',
    'дорожка',
    'Größe',
  ])('gives the same glyphs and widths for %s', (text) => {
    const ids = ({ glyphs }: Layout): number[] => glyphs.map(({ id }) => id);
    expect(ids(plain(text))).toEqual(ids(shaped(text)));
    // kerning is all that differs
    expect(Math.abs(plain(text).advanceWidth - shaped(text).advanceWidth)).toBeLessThan(
      0.02 * shaped(text).advanceWidth,
    );
  });

  test('leaves scripts that join or turn letters to the shaper', () => {
    for (const text of ['مرحبا', 'שלום', 'e\u0301'])
      expect(plain(text).glyphs.map(({ id }) => id)).toEqual(shaped(text).glyphs.map(({ id }) => id));
  });
});
