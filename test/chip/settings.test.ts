import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { settingsFinder } from '../../src/chip/settings.ts';
import { InputError } from '../../src/errors.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';

/** A second way to the same answer: a regular expression for each pattern, all that match, longest first. */
function bruteForce(keys: readonly string[], name: string): string | null | 'tie' {
  if (keys.includes(name)) return name;
  const fits = keys.filter(
    (key) => key.includes('*') && new RegExp(`^${key.replaceAll('*', '.*')}$`, 's').test(name),
  );
  const longest = Math.max(...fits.map(({ length }) => length));
  const best = fits.filter(({ length }) => length === longest);
  return best.length > 1 ? 'tie' : (best[0] ?? null);
}

describe('settingsFinder', () => {
  const letters = (unit: readonly string[], least: number, most: number) =>
    fc.string({ unit: fc.constantFrom(...unit), minLength: least, maxLength: most });
  const sheets = fc.uniqueArray(letters(['a', 'b', '*'], 1, 5), { maxLength: 6 });
  const names = fc.array(letters(['a', 'b'], 1, 6), { minLength: 1, maxLength: 12 });

  it('lets the key that is the very name go before all patterns, also where that name has a star', () => {
    const entries = { '*a': 1, 'a*': 2, '**': 3 };
    const finder = settingsFinder(null, 'ports', entries);
    expect(['*a', 'a*', '**'].map(finder.of)).toEqual([1, 2, 3]);
    expect(finder.overruled()).toEqual([]);
  });

  it.each(['ports', 'channels'] as const)(
    'takes of random %s the exact name, else the longest pattern, and stops at a tie, as trying them all does',
    (section) => {
      let ties = 0;
      let ruled = 0;
      fc.assert(
        fc.property(sheets, names, (keys, drawn) => {
          const entries = Object.fromEntries(keys.map((key) => [key, key]));
          const text = `${section}: { ${keys.map((key) => `"${key}": ${section === 'ports' ? 'open' : '{}'}`).join(', ')} }`;
          const finder = settingsFinder(parseRunSheet(text, 'c.run.yaml'), section, entries);
          const answers = drawn.map((name) => bruteForce(keys, name));
          for (const [i, name] of drawn.entries()) {
            if (answers[i] === 'tie') {
              ties++;
              expect(() => finder.of(name)).toThrow(InputError);
            } else {
              expect(finder.of(name), `${keys.join(' ')} for ${name}`).toBe(answers[i]);
            }
          }
          if (answers.includes('tie')) return;
          ruled++;
          const fits = (key: string) => drawn.some((name) => bruteForce([key], name) !== null);
          expect(finder.unmatched()).toEqual(keys.filter((key) => !fits(key)));
          expect(finder.overruled()).toEqual(
            keys.filter((key) => key.includes('*') && fits(key) && !answers.includes(key)),
          );
        }),
        { seed: 11, numRuns: 1500 },
      );
      expect(ties).toBeGreaterThan(50);
      expect(ruled).toBeGreaterThan(500);
    },
  );
});
