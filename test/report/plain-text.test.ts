import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cleanText, clipText, displayWidth, wrapText } from '../../src/report/plain-text.ts';

describe('plain text', () => {
  test.each([
    ['lane', 4],
    ['チャネル', 8],
    ['🧪', 2],
    ['e\u0301', 1],
    ['µL/min', 6],
  ])('%s takes %i columns', (text, width) => {
    expect(displayWidth(text)).toBe(width);
  });

  test('clipped and wrapped never passes the width, and wrapping loses no character but spaces', () => {
    fc.assert(
      fc.property(
        fc.string({ unit: 'grapheme' }).map(cleanText),
        fc.integer({ min: 2, max: 30 }),
        (text, width) => {
          expect(displayWidth(clipText(text, width))).toBeLessThanOrEqual(width);
          const lines = wrapText(text, width);
          for (const line of lines) expect(displayWidth(line)).toBeLessThanOrEqual(width);
          expect(lines.join('').replaceAll(' ', '')).toBe(text.replaceAll(' ', ''));
        },
      ),
      { seed: 20260504 },
    );
  });

  test('cleaned is one line without control, bidi or invisible characters', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => {
        expect(cleanText(text)).not.toMatch(/[\p{Cc}\p{Cf}\p{Cs}\u2028\u2029]/u);
      }),
      { seed: 20260504 },
    );
    expect(cleanText('a\r\n\tb\u202ec\ufeff')).toBe('a bc');
  });
});
