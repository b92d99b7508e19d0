import { expect, it } from 'vitest';
import { tubeResistance, tubeVolume } from '../../src/physics/tube.ts';

it('a tube of radius 100 µm, 1 mm long at 1 mPa s has 0.25e11 Pa s/m³ (H. Bruus, Theoretical Microfluidics, OUP 2008; from memory)', () => {
  expect(Math.round(tubeResistance(200e-6, 1e-3, 1e-3) / 1e9)).toBe(25);
  // Computed: 8/(π 1e-10).
  expect(tubeResistance(200e-6, 1e-3, 1e-3) / 25464790894.703255).toBeCloseTo(1, 14);
});

it('300 mm of 0.5 mm bore hold 58.9 µL (π d² L/4, computed)', () => {
  expect(tubeVolume(0.5e-3, 0.3) * 1e9).toBeCloseTo(58.90486225480862, 12);
});
