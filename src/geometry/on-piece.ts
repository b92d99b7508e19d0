import type { Pieces } from './pieces.ts';
import { crossingParameter, distanceToSegment, nearestParameter, segmentDistance } from './segment.ts';

/** Distance of a point from the centreline of a piece, mm. */
export function distanceToPiece(pieces: Pieces, i: number, x: number, y: number): number {
  return distanceToSegment(x, y, pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]);
}

/** The share 0…1 of a piece at which it is nearest to a point. */
export function nearestShare(pieces: Pieces, i: number, x: number, y: number): number {
  return nearestParameter(x, y, pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]);
}

/** Where a point stands beside a piece, mm: along its line from the first point on, and across it. */
export function besidePiece(pieces: Pieces, i: number, x: number, y: number) {
  const ux = (pieces.x2[i] - pieces.x1[i]) / pieces.length[i];
  const uy = (pieces.y2[i] - pieces.y1[i]) / pieces.length[i];
  const wx = x - pieces.x1[i];
  const wy = y - pieces.y1[i];
  return { ux, uy, along: wx * ux + wy * uy, across: wy * ux - wx * uy };
}

/** A place on a centreline: its point, and its position s on the centreline, mm. */
export interface PlaceOn {
  readonly x: number;
  readonly y: number;
  readonly s: number;
}

/** The place at a share of a piece. */
export function placeOn(pieces: Pieces, i: number, share: number): PlaceOn {
  return {
    x: pieces.x1[i] + share * (pieces.x2[i] - pieces.x1[i]),
    y: pieces.y1[i] + share * (pieces.y2[i] - pieces.y1[i]),
    s: pieces.start[i] + share * pieces.length[i],
  };
}

/** Distance between the centrelines of two pieces, mm. */
export function distanceBetween({ x1, y1, x2, y2 }: Pieces, i: number, j: number): number {
  return segmentDistance(x1[i], y1[i], x2[i], y2[i], x1[j], y1[j], x2[j], y2[j]);
}

/** The share 0…1 of piece i at which piece j crosses it; NaN where none does. */
export function crossingShare({ x1, y1, x2, y2 }: Pieces, i: number, j: number): number {
  return crossingParameter(x1[i], y1[i], x2[i], y2[i], x1[j], y1[j], x2[j], y2[j]);
}

/** Sine of the angle from one piece to another. */
export function sineBetween(pieces: Pieces, i: number, j: number): number {
  const ux = pieces.x2[i] - pieces.x1[i];
  const uy = pieces.y2[i] - pieces.y1[i];
  const vx = pieces.x2[j] - pieces.x1[j];
  const vy = pieces.y2[j] - pieces.y1[j];
  return (ux * vy - uy * vx) / (pieces.length[i] * pieces.length[j]);
}
