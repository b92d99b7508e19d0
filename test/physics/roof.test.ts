import { expect, it } from 'vitest';
import { meanRoofRise, risenResistanceFactor } from '../../src/physics/roof.ts';

it('a roof 1 mm wide at 10 kPa in 1.5 MPa elastomer rises 4 µm on average', () => {
  expect(meanRoofRise(10e3, 1e-3, 1.5e6)).toBeCloseTo(4e-6, 15);
  expect(meanRoofRise(-10e3, 1e-3, 1.5e6)).toBeCloseTo(-4e-6, 15);
});

it('is the mean opening of one face of a flat slit in an incompressible body, within 2 %', () => {
  // (2(1 − ν²) p/E) √(w²/4 − x²), ν = ½, averaged over the slit.
  const cells = 100000;
  let sum = 0;
  for (let i = 0; i < cells; i++) sum += 1.5 * Math.sqrt(0.25 - ((i + 0.5) / cells - 0.5) ** 2);
  expect(Math.abs(meanRoofRise(1, 1, 1) / (sum / cells) - 1)).toBeLessThan(0.02);
});

it('a rise of 5 % of the depth takes 13.6 % off the resistance, and a roof that touches the floor shuts the duct', () => {
  expect(risenResistanceFactor(50e-6, 2.5e-6)).toBeCloseTo(1 / 1.05 ** 3, 12);
  expect(risenResistanceFactor(50e-6, 0)).toBe(1);
  expect(risenResistanceFactor(50e-6, -50e-6)).toBe(Infinity);
});
