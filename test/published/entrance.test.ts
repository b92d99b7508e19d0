import { expect, it } from 'vitest';
import { entranceLength, platesEntranceLength } from '../../src/physics/entrance.ts';

// R.-Y. Chen, J. Fluids Eng. 95 (1973) 153 (forms from memory; values computed from them).
it('Chen 1973: a tube takes 0.6 D at Re 0 and 6.045 D at Re 100', () => {
  expect(entranceLength(0, 1e-3)).toBeCloseTo(0.6e-3, 15);
  expect(entranceLength(100, 1)).toBeCloseTo(0.6 / 4.5 + 5.6, 12);
});

it('Chen 1973: plates take 0.315 D_h at Re 0 and 1.2145 D_h at Re 100', () => {
  expect(platesEntranceLength(0, 1)).toBeCloseTo(0.315, 12);
  expect(platesEntranceLength(100, 1)).toBeCloseTo(0.315 / 2.75 + 1.1, 12);
});

it('the tube form is the longer at every Reynolds number of laminar flow', () => {
  for (let re = 0; re <= 2300; re += 10)
    expect(entranceLength(re, 1)).toBeGreaterThan(platesEntranceLength(re, 1));
});
