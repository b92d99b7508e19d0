import { expect, test } from 'vitest';
import { roomLengthM } from '../../src/network/lengths.ts';

test('the room of a reach is its duct length without what joints add, in metres', () => {
  const lengths = { reachDuctMm: Float64Array.of(8, 12.5), reachJointMm: Float64Array.of(0, -0.5) };
  expect(roomLengthM(lengths, 0)).toBe(0.008);
  expect(roomLengthM(lengths, 1)).toBeCloseTo(0.013, 15);
});
