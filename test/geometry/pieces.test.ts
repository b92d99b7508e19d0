import { describe, expect, it } from 'vitest';
import {
  directionOf,
  endPiece,
  endsAtVertex,
  goesOnSmoothly,
  neighbourPiece,
  pieceAt,
  startsAtVertex,
  toPieces,
} from '../../src/geometry/pieces.ts';
import { chipOf } from '../network/chip-of.ts';

/** An open L of 3 + 4, beside it a single stroke, and a closed triangle 3, 4, 5 of another channel. */
const pieces = toPieces(
  chipOf([
    {
      name: 'open',
      widthMm: 0.2,
      lines: [
        [0, 0, 3, 0, 3, 4],
        [0, 9, 2, 9],
      ],
    },
    { name: 'ring', widthMm: 0.4, plane: 1, closed: true, lines: [[10, 0, 13, 0, 13, 4, 10, 0]] },
  ]).channels,
);

describe('the columns of all pieces', () => {
  it('run through channels and centrelines in drawn order, each position from its own first point', () => {
    expect(pieces).toMatchObject({ count: 6, centrelineCount: 3 });
    expect([...pieces.firstPiece]).toEqual([0, 2, 3, 6]);
    expect([...pieces.length]).toEqual([3, 4, 2, 3, 4, 5]);
    expect([...pieces.start]).toEqual([0, 3, 0, 0, 3, 7]);
    expect([...pieces.centrelineLength]).toEqual([7, 2, 12]);
    expect([...pieces.centreline]).toEqual([0, 0, 1, 2, 2, 2]);
    expect([...pieces.channel]).toEqual([0, 0, 0, 1, 1, 1]);
    expect([...pieces.centrelineChannel]).toEqual([0, 0, 1]);
    expect([...pieces.plane]).toEqual([0, 0, 0, 1, 1, 1]);
    expect([...pieces.half]).toEqual([0.1, 0.1, 0.1, 0.2, 0.2, 0.2]);
  });

  it('say which way each end points out of its centreline', () => {
    expect([...pieces.outX].slice(0, 4)).toEqual([-1, 0, -1, 1]);
    expect([...pieces.outY].slice(0, 4).map((y) => y + 0)).toEqual([0, 1, 0, 0]);
  });
});

describe('a position on a centreline', () => {
  it('lies on the piece that begins there or before, and beyond the ends on the last of them', () => {
    expect([-1, 0, 2.9, 3, 6.9, 7, 99].map((s) => pieceAt(pieces, 0, s))).toEqual([0, 0, 0, 1, 1, 1, 1]);
    expect([0, 3, 6.9, 7, 12].map((s) => pieceAt(pieces, 2, s))).toEqual([3, 4, 4, 5, 5]);
  });
});

describe('neighbours', () => {
  it('end at the ends of an open centreline and go round a closed one', () => {
    expect([0, 1, 2].map((i) => neighbourPiece(pieces, i, 1))).toEqual([1, -1, -1]);
    expect([0, 1, 2].map((i) => neighbourPiece(pieces, i, -1))).toEqual([-1, 0, -1]);
    expect([3, 4, 5].map((i) => neighbourPiece(pieces, i, 1))).toEqual([4, 5, 3]);
    expect([3, 4, 5].map((i) => neighbourPiece(pieces, i, -1))).toEqual([5, 3, 4]);
  });

  it('meet in a vertex but at the ends of an open centreline', () => {
    const all = [0, 1, 2, 3, 4, 5];
    expect(all.map((i) => startsAtVertex(pieces, i))).toEqual([false, true, false, true, true, true]);
    expect(all.map((i) => endsAtVertex(pieces, i))).toEqual([true, false, false, true, true, true]);
  });
});

describe('going on smoothly', () => {
  /** Two chords of length 0.1 on bends of radius 1 that turn by so much (rad). */
  const chords = (turn: number, radii: readonly number[] = [1, 1]) => {
    const line = [0, 0, 0.1, 0, 0.1 + 0.1 * Math.cos(turn), 0.1 * Math.sin(turn)];
    return toPieces(chipOf([{ name: 'a', widthMm: 0.1, lines: [line], radii: [radii] }]).channels);
  };
  it('is turning by no more than both chords bend, and never straight pieces or a turn back', () => {
    // together they bend by 0.2
    expect(goesOnSmoothly(chords(0.1), 0, 1)).toBe(true);
    expect(goesOnSmoothly(chords(-0.19), 0, 1)).toBe(true);
    expect(goesOnSmoothly(chords(0.21), 0, 1)).toBe(false);
    expect(goesOnSmoothly(chords(Math.PI), 0, 1)).toBe(false);
    expect(goesOnSmoothly(chords(0.1, [0, 1]), 0, 1)).toBe(false);
    expect(goesOnSmoothly(chords(0.1, [1, 0]), 0, 1)).toBe(false);
  });
});

describe('the ends of centrelines', () => {
  it('are the first and the last piece of each', () => {
    expect([0, 1, 2, 3, 4, 5].map((end) => endPiece(pieces, end))).toEqual([0, 1, 2, 2, 3, 5]);
  });
});

describe('the direction of a piece', () => {
  it('is a unit vector as drawn', () => {
    expect(directionOf(pieces, 1)).toEqual([0, 1]);
    const [ux, uy] = directionOf(pieces, 5);
    expect(ux).toBeCloseTo(-0.6, 12);
    expect(uy).toBeCloseTo(-0.8, 12);
  });
});
