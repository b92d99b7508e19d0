import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layerKey, matches } from '../../src/runsheet/names.ts';
import { didYouMean, nearest } from '../../src/runsheet/nearest.ts';
import { quote, quoteSome } from '../../src/runsheet/quote.ts';

describe('matches', () => {
  it('lets * stand for any run of characters, also none', () => {
    for (const [pattern, name, answer] of [
      ['lane-*', 'lane-1', true],
      ['lane-*', 'lane-', true],
      ['lane-*', 'Lane-1', false],
      ['*-1', 'lane-1', true],
      ['l*n*1', 'lane-1', true],
      ['*', '', true],
      ['a*a', 'a', false],
      ['lane', 'lane-1', false],
      ['la.e*', 'lane-1', false],
    ] as const) {
      expect(matches(pattern, name), `${pattern} on ${name}`).toBe(answer);
    }
  });

  it('agrees with a regular expression on random patterns', () => {
    const text = fc.string({ unit: fc.constantFrom('a', 'b', '*'), maxLength: 8 });
    const name = fc.string({ unit: fc.constantFrom('a', 'b'), maxLength: 10 });
    fc.assert(
      fc.property(text, name, (pattern, word) => {
        expect(matches(pattern, word)).toBe(new RegExp(`^${pattern.replaceAll('*', '.*')}$`).test(word));
      }),
      { seed: 1, numRuns: 2000 },
    );
  });

  it('stays quick on a pattern that would make a regular expression hang', () => {
    expect(matches(`${'*a'.repeat(50)}b`, 'a'.repeat(5000))).toBe(false);
  });
});

describe('nearest', () => {
  it('finds what was meant and nothing far off', () => {
    expect(nearest('presure', ['flow', 'pressure', 'head'])).toBe('pressure');
    expect(nearest('dpeth', ['depth', 'layers'])).toBe('depth');
    expect(nearest('LANES', ['lanes'])).toBe('lanes');
    expect(nearest('min-width', ['min_width', 'min_wall'])).toBe('min_width');
    expect(nearest('temperature', ['flow', 'depth'])).toBeNull();
    expect(nearest('x', [])).toBeNull();
  });
});

it('a near miss is asked for by name, and nothing where none is near', () => {
  expect(didYouMean('LANE', ['waste', 'lane'])).toBe('did you mean "lane"?');
  expect(didYouMean('temperature', ['flow', 'depth'])).toBeNull();
});

it('of many names the first are told, and how many more there are', () => {
  expect(quoteSome(['a', 'b', 'c'], 3)).toBe('"a", "b", "c"');
  expect(quoteSome(['a', 'b', 'c', 'd'], 2)).toBe('"a", "b" and 2 more');
});

describe('quote', () => {
  it('keeps a message one short line whatever the text holds', () => {
    expect(quote('a\nb\u202e\u0007')).toBe('"a\\u000ab\\u202e\\u0007"');
    expect(quote('x'.repeat(100))).toBe(`"${'x'.repeat(60)}…"`);
  });
});

describe('layerKey', () => {
  it('forgets case and surrounding space', () => {
    expect(layerKey('  Lanes ')).toBe('lanes');
  });
});
