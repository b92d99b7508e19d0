import { describe, expect, it } from 'vitest';
import { toPieces } from '../../src/geometry/pieces.ts';
import {
  addStripStretches,
  coveredUpTo,
  isInPieceStrip,
  lineTo,
  type StripEnds,
} from '../../src/geometry/strip.ts';
import { chipOf } from '../network/chip-of.ts';
import { randomFrom } from '../solve/graphs.ts';

const SLACK = 1e-3;
/** An L of two pieces, 2 wide, and a straight stroke 1 wide; the second one's end is a seam. */
const pieces = toPieces(
  chipOf([
    { name: 'a', widthMm: 2, lines: [[0, 0, 6, 0, 6, 5]] },
    { name: 'b', widthMm: 1, lines: [[0, 20, 10, 20]] },
  ]).channels,
);
const seam: StripEnds = { seam: Uint8Array.of(0, 0, 0, 1), seamWith: Int32Array.of(-1, -1, -1, -1) };

function stretches(piece: number, line: readonly number[], slackMm = 0, ends: StripEnds | null = null) {
  const into: number[] = [];
  const [ax, ay, bx, by] = line;
  addStripStretches(into, pieces, piece, lineTo(ax, ay, bx, by), slackMm, ends);
  return into;
}

describe('a point', () => {
  it.each([
    ['on the centreline', 3, 0, true],
    ['on the wall', 3, 1, true],
    ['within the slack of the wall', 3, 1 + 0.9 * SLACK, true],
    ['beyond the slack of the wall', 3, -1 - 1.1 * SLACK, false],
    ['at the corner of the square end', 0, -1, true],
    ['within the slack of the square end', -0.9 * SLACK, 0.5, true],
    ['beyond the slack of the square end', -1.1 * SLACK, 0.5, false],
    ['beyond the vertex, in its disc', 6.7, -0.7, true],
    ['beyond the vertex, past its disc', 6.8, -0.8, false],
  ])('%s', (_, x, y, wanted) => {
    expect(isInPieceStrip(pieces, 0, x, y, SLACK, null)).toBe(wanted);
  });

  it('beyond an end is in the strip where an equal one goes on', () => {
    expect(isInPieceStrip(pieces, 2, 10.4, 20, 0, null)).toBe(false);
    expect(isInPieceStrip(pieces, 2, 10.4, 20, 0, seam)).toBe(true);
    expect(isInPieceStrip(pieces, 2, 10.4, 20.4, 0, seam)).toBe(false);
    expect(isInPieceStrip(pieces, 2, -0.1, 20, 0, seam)).toBe(false);
  });
});

describe('the stretches of a line in a strip', () => {
  it('are from wall to wall, from end to vertex disc, and none beside it', () => {
    expect(stretches(0, [3, -5, 3, 5])).toEqual([4, 6]);
    const along = stretches(0, [-2, 0, 20, 0]);
    expect([Math.min(...along), Math.max(...along)]).toEqual([2, 9]);
    expect(stretches(0, [3, 2, 9, 2])).toEqual([]);
    expect(stretches(0, [3, 0, 3, 0])).toEqual([]);
  });

  it('end at the exact end also where slack let the line in', () => {
    // from half a slack before the square end of b, outwards and inwards
    const [from, to] = stretches(2, [-0.5 * SLACK, 20, -4, 20], SLACK);
    expect([from, to]).toEqual([0, 0]);
    const leaving = stretches(2, [5, 20, -4, 20], SLACK);
    expect(leaving[1]).toBeCloseTo(5, 12);
  });

  it('hold those points of random lines that are in the strip', () => {
    const random = randomFrom(9);
    let inside = 0;
    for (let n = 0; n < 200; n++) {
      const line = Array.from({ length: 4 }, () => 12 * random() - 3);
      const [ax, ay, bx, by] = line;
      const span = Math.hypot(bx - ax, by - ay);
      for (const piece of [0, 1]) {
        const found = stretches(piece, line);
        for (let k = 0; k < 20; k++) {
          const t = random();
          const isIn = isInPieceStrip(pieces, piece, ax + t * (bx - ax), ay + t * (by - ay), 0, null);
          const isListed = found.some(
            (from, i) => i % 2 === 0 && t * span >= from && t * span <= found[i + 1],
          );
          expect(isListed, `${line} at ${t} in ${piece}`).toBe(isIn);
          if (isIn) inside++;
        }
      }
    }
    expect(inside).toBeGreaterThan(500);
  });
});

describe('how far stretches reach together', () => {
  it('is up to the first gap, whatever their order', () => {
    expect(coveredUpTo([3, 5, 0, 2, 1, 3], 0, 0)).toBe(5);
    expect(coveredUpTo([0, 2, 2.1, 5], 0, 1)).toBe(2);
    expect(coveredUpTo([], 1, 1)).toBe(1);
  });

  it('begins within the slack, or nowhere', () => {
    expect(coveredUpTo([0.9, 4], 0, 1)).toBe(4);
    expect(coveredUpTo([1.1, 4], 0, 1)).toBe(0);
    expect(coveredUpTo([-3, -1, 0.5, 4], 0, 1)).toBe(4);
  });
});
