import { parseSync } from 'vite';
import { describe, expect, it } from 'vitest';
import { functionsOf, mutationsOf, withMarks } from './mutations.ts';
import { seededSample, shareInterval } from './score.ts';

const SOURCE = `import { a } from './a.ts';
const LIMIT: 3 | 4 = 1e-9 as never;
export function f(x: number, on = true): string {
  if (x <= LIMIT && !on) throw new Error('x' + 1);
  let sum = -x;
  sum += Math.min(x, 2);
  return \`\${sum}\` + 'mm';
}
const g = (x: number) => x * a;
`;

describe('mutations of a source', () => {
  const found = mutationsOf('f.ts', SOURCE);

  it('are of operators, signs, constants, conditions, min and max, and whole statements; not of types, texts or what is thrown', () => {
    expect(found.map(({ line, was, becomes }) => `${line}: ${was} → ${becomes}`).sort()).toEqual(
      [
        '2: 1e-9 → 1.25e-9',
        '3: true → false',
        '4: x <= LIMIT && !on → !(x <= LIMIT && !on)',
        '4: && → ||',
        '4: <= → <',
        '4: ! →  ',
        '5: - →  ',
        '6: sum += Math.min(x, 2); → ;',
        '6: += → -=',
        '6: Math.min → Math.max',
        '6: 2 → 3',
        '9: * → /',
      ].sort(),
    );
  });

  it('each leave a source that can be read and is another', () => {
    for (const { start, end, was, becomes } of found) {
      const text = SOURCE.slice(0, start) + becomes + SOURCE.slice(end);
      expect(text).not.toBe(SOURCE);
      expect(SOURCE.slice(start, end)).toBe(was);
      expect(parseSync('f.ts', text).errors).toEqual([]);
    }
  });

  it('know the function that they are in, and a marked source runs as before', () => {
    const within = (line: number) => found.filter((one) => one.line === line).map((one) => one.within);
    expect([within(2), within(5), within(9)]).toEqual([[-1], [0], [1]]);
    const bodies = functionsOf('f.ts', SOURCE);
    expect(bodies.length).toBe(2);
    const marked = withMarks(SOURCE, bodies, 7);
    expect(parseSync('f.ts', marked).errors).toEqual([]);
    expect(marked).toContain('string {globalThis.functionsRun[7] = 1;');
    expect(marked).toContain('=> (globalThis.functionsRun[8] = 1, x * a);');
  });
});

describe('the score', () => {
  it('has Wilson’s interval: 90 of 100 is 82.6 to 94.5 %', () => {
    const { low, high } = shareInterval(90, 100);
    expect(low).toBeCloseTo(0.8256, 4);
    expect(high).toBeCloseTo(0.9448, 4);
  });

  it('is of a sample that the seed decides, without any one twice', () => {
    const all = Array.from({ length: 50 }, (_, i) => i);
    const sample = seededSample(all, 20, 1);
    expect(new Set(sample).size).toBe(20);
    expect(seededSample(all, 20, 1)).toEqual(sample);
    expect(seededSample(all, 20, 2)).not.toEqual(sample);
    expect(seededSample(all, 99, 1).sort((a, b) => a - b)).toEqual(all);
  });
});
