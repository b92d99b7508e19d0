import { expect, it } from 'vitest';
import { spreadingLength } from '../../src/physics/entrance.ts';
import { reynoldsNumber } from '../../src/physics/reynolds.ts';
import { tubeResistance, tubeVolume } from '../../src/physics/tube.ts';

it('tube pieces in series add up, and halving the bore multiplies resistance by 16', () => {
  expect(tubeResistance(1e-3, 0.3, 1e-3)).toBeCloseTo(
    tubeResistance(1e-3, 0.1, 1e-3) + tubeResistance(1e-3, 0.2, 1e-3),
    3,
  );
  expect(tubeResistance(0.5e-3, 0.3, 1e-3) / tubeResistance(1e-3, 0.3, 1e-3)).toBeCloseTo(16, 12);
  expect(tubeResistance(1e-3, 0, 1e-3)).toBe(0);
});

it('a tube without bore or of negative length is refused', () => {
  expect(() => tubeResistance(0, 0.3, 1e-3)).toThrow(/bore must be above 0 m/);
  expect(() => tubeVolume(1e-3, -0.1)).toThrow(/length must be 0 m or more/);
  expect(() => tubeResistance(Number.NaN, 0.3, 1e-3)).toThrow(RangeError);
});

it('the Reynolds number has no sign', () => {
  expect(reynoldsNumber(1000, -0.1, 1e-4, 1e-3)).toBeCloseTo(10, 12);
});

it('flow spreads over half a chamber’s width from its axis, over the whole from its edge', () => {
  expect(spreadingLength(4e-3, 'axis')).toBe(2e-3);
  expect(spreadingLength(4e-3, 'edge')).toBe(4e-3);
});
