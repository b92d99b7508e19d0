import { describe, expect, it } from 'vitest';
import type { Chip } from '../../src/chip/types.ts';
import { portGridFaults } from '../../src/findings/port-grid.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { chipOf, runOf } from '../network/chip-of.ts';

/**
 * Interconnect grid that ISO 22916:2022 grew out of (an open guideline of 2017, seen reprinted; the clauses of the standard
 * itself were not seen): ports on a 1.5 mm grid, the first at (3 mm, 3 mm) from the edges; hole diameter at 1.5 mm pitch
 * 0.4–0.7 mm, at 3.0 mm 0.4–2.0 mm, at 4.5 mm 0.4–3.5 mm.
 */
const PUBLISHED = [
  { pitch: 1.5, least: 0.4, most: 0.7 },
  { pitch: 3, least: 0.4, most: 2 },
  { pitch: 4.5, least: 0.4, most: 3.5 },
];

function faults(pitchMm: number, diameterMm: number, x = 3, y = 3): readonly string[] {
  const plain = chipOf([], [{ name: 'p', x, y, radiusMm: diameterMm / 2 }]);
  const chip: Chip = {
    ...plain,
    edge: {
      name: 'chip-edge',
      rings: [Float64Array.from([0, 0, 75, 0, 75, 24, 0, 24, 0, 0])],
      sidesMm: [75, 24],
    },
  };
  const context = { chip, run: runOf(chip), network: buildNetwork(chip), flow: null };
  return portGridFaults(context, { value: pitchMm / 1e3, origin: 'run sheet' }).map(({ message }) => message);
}

describe('the published interconnect grid', () => {
  for (const { pitch, least, most } of PUBLISHED) {
    it(`takes holes of ${least} mm to ${most} mm at a pitch of ${pitch} mm, both ends included, and no others`, () => {
      expect(faults(pitch, least)).toEqual([]);
      expect(faults(pitch, most)).toEqual([]);
      expect(faults(pitch, least * 0.99)).toHaveLength(1);
      expect(faults(pitch, most * 1.01)).toHaveLength(1);
    });

    it(`takes the point 3 mm from two edges, and those whole pitches of ${pitch} mm on`, () => {
      expect(faults(pitch, 0.5, 3 + 4 * pitch, 3 + 2 * pitch)).toEqual([]);
      expect(faults(pitch, 0.5, 3 + 4 * pitch + 0.0505, 3 + 2 * pitch)).toHaveLength(1);
    });
  }
});
