import { expect, it } from 'vitest';
import { curvedFrictionFactor, deanNumber } from '../../src/physics/dean.ts';

// C. M. White, Proc. R. Soc. A 123 (1929) 645 (constants seen, values computed from them).
it.each([
  [11.6, 1],
  [15, 1.007348042],
  [50, 1.245935755],
  [111.803398875, 1.58721946009],
])('White 1929 at De %d: friction × %d', (dean, factor) => {
  expect(curvedFrictionFactor(dean)).toBeCloseTo(factor, 9);
});

it('friction is that of a straight tube at and below De 11.6, and never less or not a number above', () => {
  expect(curvedFrictionFactor(0)).toBe(1);
  expect(curvedFrictionFactor(11.59)).toBe(1);
  for (let de = 11.6; de < 12; de += 0.001) expect(curvedFrictionFactor(de)).toBeGreaterThanOrEqual(1);
});

it('De = Re √(D_h/(2 R_c)): Re 500 at R_c = 10 D_h is 111.803398875', () => {
  expect(deanNumber(500, 1e-4, 1e-3)).toBeCloseTo(111.803398875, 9);
});
