import { expect, it } from 'vitest';
import { deanNumber } from '../../src/physics/dean.ts';

it('De = Re √(D_h/(2 R_c)): Re 500 at R_c = 10 D_h is 111.803398875', () => {
  expect(deanNumber(500, 1e-4, 1e-3)).toBeCloseTo(111.803398875, 9);
});
