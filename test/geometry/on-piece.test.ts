import { describe, expect, it } from 'vitest';
import {
  besidePiece,
  distanceToPiece,
  nearestShare,
  placeOn,
  sineBetween,
} from '../../src/geometry/on-piece.ts';
import { toPieces } from '../../src/geometry/pieces.ts';
import { chipOf } from '../network/chip-of.ts';

/** Two pieces: 4 mm to the right, then 3 mm down. */
const pieces = toPieces(chipOf([{ name: 'a', widthMm: 0.2, lines: [[1, 1, 5, 1, 5, 4]] }]).channels);

describe('places on and beside a piece', () => {
  it('gives a point and its position on the centreline', () => {
    expect(placeOn(pieces, 1, 0.5)).toEqual({ x: 5, y: 2.5, s: 5.5 });
  });

  it('finds the nearest place within the piece and the distance from it', () => {
    expect(nearestShare(pieces, 0, 2, 9)).toBe(0.25);
    expect(distanceToPiece(pieces, 0, 2, 9)).toBe(8);
    expect(nearestShare(pieces, 0, -2, 5)).toBe(0);
    expect(distanceToPiece(pieces, 0, -2, 5)).toBe(5);
  });

  it('sees a point along the line of the piece and across it, positive to the right as y points down', () => {
    expect(besidePiece(pieces, 1, 3, 0)).toEqual({ ux: 0, uy: 1, along: -1, across: 2 });
    expect(besidePiece(pieces, 0, 0, 3)).toEqual({ ux: 1, uy: 0, along: -1, across: 2 });
  });

  it('tells which way one piece turns to another', () => {
    expect(sineBetween(pieces, 0, 1)).toBe(1);
    expect(sineBetween(pieces, 1, 0)).toBe(-1);
  });
});
