import { describe, expect, it } from 'vitest';
import {
  commonOutline,
  distanceToOutline,
  leastWidth,
  middleOfOutline,
  type Outline,
  pieceOutline,
} from '../../src/geometry/outline.ts';
import { toPieces } from '../../src/geometry/pieces.ts';
import { isInPieceStrip } from '../../src/geometry/strip.ts';
import { chipOf } from '../network/chip-of.ts';
import { randomFrom } from '../solve/graphs.ts';

/** An L of two pieces, 2 wide: round where they meet, square at the ends. */
const pieces = toPieces(chipOf([{ name: 'a', widthMm: 2, lines: [[0, 0, 6, 0, 6, 5]] }]).channels);
const box = (x: number, y: number, w: number, h: number): Outline => [x, y, x + w, y, x + w, y + h, x, y + h];

function areaOf(outline: Outline): number {
  let twice = 0;
  for (let k = 0; k < outline.length; k += 2) {
    const next = (k + 2) % outline.length;
    twice += outline[k] * outline[next + 1] - outline[next] * outline[k + 1];
  }
  return twice / 2;
}

describe('the outline of a piece', () => {
  it('turns left round its rectangle and the half disc at its inner vertex', () => {
    const fine = areaOf(pieceOutline(pieces, 0, 0, 'fine'));
    expect(fine).toBeLessThanOrEqual(12 + Math.PI / 2);
    expect(fine).toBeGreaterThan(12 + Math.PI / 2 - 5e-4);
    const coarse = areaOf(pieceOutline(pieces, 0, 0, 'coarse'));
    expect(coarse).toBeLessThan(fine);
    expect(coarse).toBeGreaterThan(12 + (Math.PI / 2) * 0.99);
  });

  it('grows on every side alike', () => {
    // 0.5 wider to either side and beyond its square end
    const grown = areaOf(pieceOutline(pieces, 0, 0.5, 'fine'));
    expect(grown).toBeCloseTo(3 * 6.5 + (Math.PI / 2) * 1.5 ** 2, 3);
  });

  it('holds exactly the points that are in the piece’s strip', () => {
    const random = randomFrom(5);
    for (const piece of [0, 1]) {
      const outline = pieceOutline(pieces, piece, 0, 'fine');
      let inside = 0;
      for (let k = 0; k < 2000; k++) {
        const [x, y] = [10 * random() - 2, 10 * random() - 2];
        const isIn = isInPieceStrip(pieces, piece, x, y, 0, null);
        if (isIn) inside++;
        const distance = distanceToOutline(outline, x, y);
        // but for the sagitta of the rounds
        if (isIn) expect(distance).toBeLessThan(6e-5);
        else expect(distance).toBeGreaterThan(0);
      }
      expect(inside).toBeGreaterThan(200);
    }
  });
});

describe('what two outlines have in common', () => {
  it('is the overlap of two boxes, one within the other, or nothing', () => {
    expect(areaOf(commonOutline(box(0, 0, 4, 3), box(2, 1, 5, 5)))).toBeCloseTo(4, 12);
    expect(areaOf(commonOutline(box(0, 0, 9, 9), box(2, 1, 3, 2)))).toBeCloseTo(6, 12);
    expect(areaOf(commonOutline(box(2, 1, 3, 2), box(0, 0, 9, 9)))).toBeCloseTo(6, 12);
    expect(commonOutline(box(0, 0, 1, 1), box(2, 0, 1, 1))).toEqual([]);
    expect(commonOutline(box(0, 0, 1, 1), box(0, 2, 1, 1))).toEqual([]);
  });

  it('has eight corners where a square is laid on its own turned by 45°', () => {
    const half = Math.SQRT2;
    const turned: Outline = [half, 0, 0, half, -half, 0, 0, -half];
    // each of the four corners that are cut off is half a square whose side is 2 − √2
    const cut = (2 - Math.SQRT2) ** 2;
    expect(areaOf(commonOutline(box(-1, -1, 2, 2), turned))).toBeCloseTo(4 - 2 * cut, 12);
  });
});

describe('an outline', () => {
  it('has its least width across its shorter sides, and a line has none', () => {
    const { widthMm, nx, ny } = leastWidth(box(1, 1, 5, 2));
    expect(widthMm).toBeCloseTo(2, 12);
    expect(Math.abs(ny)).toBeCloseTo(1, 12);
    expect(Math.abs(nx)).toBeCloseTo(0, 12);
    // a right triangle 3, 4, 5 is 12/5 high on its longest side
    expect(leastWidth([0, 0, 4, 0, 0, 3]).widthMm).toBeCloseTo(2.4, 12);
    expect(leastWidth([])).toEqual({ widthMm: 0, nx: 1, ny: 0 });
  });

  it('has the mean of its corners as its middle', () => {
    expect(middleOfOutline([0, 0, 4, 0, 0, 3])).toEqual({ x: 4 / 3, y: 1 });
  });

  it('is at no distance from what it holds, and else at that of its nearest side or corner', () => {
    const one = box(0, 0, 4, 2);
    expect(distanceToOutline(one, 1, 1)).toBe(0);
    expect(distanceToOutline(one, 4, 1)).toBe(0);
    expect(distanceToOutline(one, 1, 5)).toBe(3);
    expect(distanceToOutline(one, -3, 1)).toBe(3);
    expect(distanceToOutline(one, 7, 6)).toBe(5);
  });
});
