import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cleanText, clipText, displayWidth, joined, wrapText } from '../../src/report/plain-text.ts';

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

  test('wrapped keeps a number and its unit on one line', () => {
    expect(wrapText('mean residence time 33.6 s', 25)).toEqual(['mean residence time', '33.6 s']);
    expect(wrapText('send it 27.02 µL/min, or', 15)).toEqual(['send it', '27.02 µL/min,', 'or']);
    expect(wrapText('in 2 reaches', 5)).toEqual(['in 2', 'reach', 'es']);
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

test('parts that do not exist leave no separator behind', () => {
  expect(joined(['a', null, '', 'b'], ', ')).toBe('a, b');
  expect(joined([null, ''], ', ')).toBe('');
});
