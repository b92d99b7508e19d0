import { expect, it } from 'vitest';
import { entranceLength } from '../../src/physics/entrance.ts';

// R.-Y. Chen, J. Fluids Eng. 95 (1973) 153 (forms from memory; values computed from them).
it('Chen 1973: a tube takes 0.6 D at Re 0 and 6.045 D at Re 100', () => {
  expect(entranceLength(0, 1e-3)).toBeCloseTo(0.6e-3, 15);
  expect(entranceLength(100, 1)).toBeCloseTo(0.6 / 4.5 + 5.6, 12);
});

it('the tube form is longer than that between plates at every Reynolds number of laminar flow', () => {
  const plates = (re: number): number => 0.315 / (1 + 0.0175 * re) + 0.011 * re;
  for (let re = 0; re <= 2300; re += 10) expect(entranceLength(re, 1)).toBeGreaterThan(plates(re));
});
