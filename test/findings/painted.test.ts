import { describe, expect, it } from 'vitest';
import { gapBetween, gapToHole } from '../../src/findings/painted.ts';
import { toPieces } from '../../src/geometry/pieces.ts';
import { type ChannelSpec, chipOf } from '../network/chip-of.ts';

type Cap = 'butt' | 'round' | 'square';

function painted(specs: readonly (ChannelSpec & { readonly cap?: Cap })[]) {
  const plain = chipOf(specs);
  const chip = {
    ...plain,
    channels: plain.channels.map((channel, k) => ({ ...channel, linecap: specs[k].cap ?? 'butt' })),
  };
  return { chip, pieces: toPieces(chip.channels) };
}

describe('the painted stroke', () => {
  it('ends square at a butt cap, half a width on at a square cap, and in a half circle at a round one', () => {
    const gapOf = (cap: Cap, line: readonly number[]): number => {
      const { chip, pieces } = painted([
        { name: 'wall', widthMm: 0.4, lines: [[0, 0, 10, 0]] },
        { name: 'stub', widthMm: 0.2, lines: [line], cap },
      ]);
      return gapBetween(chip, pieces, 0, 1).distanceMm;
    };
    expect(gapOf('butt', [5, 5, 5, 1])).toBeCloseTo(0.8, 12);
    expect(gapOf('square', [5, 5, 5, 1])).toBeCloseTo(0.7, 12);
    expect(gapOf('round', [5, 5, 5, 1])).toBeCloseTo(0.7, 12);
    // at 45° a corner of the butt end, √2/2 of half a width nearer; of the square one, √2 of it
    const slanted = [9, 5, 5, 1];
    expect(gapOf('butt', slanted)).toBeCloseTo(0.8 - 0.1 * Math.SQRT1_2, 12);
    expect(gapOf('square', slanted)).toBeCloseTo(0.8 - 0.1 * Math.SQRT2, 12);
    expect(gapOf('round', slanted)).toBeCloseTo(0.7, 12);
  });

  it('is round at an inner vertex, whatever the caps', () => {
    const { chip, pieces } = painted([
      { name: 'knee', widthMm: 0.2, lines: [[0, 0, 4, 4, 8, 0]] },
      { name: 'wall', widthMm: 0.4, lines: [[0, 5, 10, 5]] },
    ]);
    expect(gapBetween(chip, pieces, 0, 2).distanceMm).toBeCloseTo(1 - 0.1 - 0.2, 12);
  });

  it('faces the other stroke at two points on the walls that are the gap apart', () => {
    const { chip, pieces } = painted([
      { name: 'wall', widthMm: 0.4, lines: [[0, 0, 10, 0]] },
      { name: 'stub', widthMm: 0.2, lines: [[5, 5, 5, 1]] },
    ]);
    const { distanceMm, x1, y1, x2, y2 } = gapBetween(chip, pieces, 0, 1);
    expect(Math.hypot(x2 - x1, y2 - y1)).toBeCloseTo(distanceMm, 12);
    expect(y1).toBeCloseTo(0.2, 12);
    expect(y2).toBeCloseTo(1, 12);
  });

  it('has a gap of less than nothing where it overlaps another, by how far', () => {
    const { chip, pieces } = painted([
      { name: 'one', widthMm: 0.4, lines: [[0, 0, 10, 0]] },
      { name: 'two', widthMm: 0.2, lines: [[0, 0.25, 10, 0.25]] },
    ]);
    expect(gapBetween(chip, pieces, 0, 1).distanceMm).toBeCloseTo(-0.05, 12);
  });

  it('is measured from a hole to its square end, not to a half circle that is not there', () => {
    const { chip, pieces } = painted([{ name: 'stub', widthMm: 1, lines: [[0, 0, 5, 0]] }]);
    expect(gapToHole(chip, pieces, 0, { xMm: 7, yMm: 0, radiusMm: 0.5 }).distanceMm).toBeCloseTo(1.5, 12);
    expect(gapToHole(chip, pieces, 0, { xMm: 2, yMm: 2, radiusMm: 0.5 }).distanceMm).toBeCloseTo(1, 12);
  });
});
