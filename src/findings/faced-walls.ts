import { LIMIT_SLACK } from '../chip/limits.ts';
import type { Nearness } from '../geometry/near.ts';
import { distanceToPiece, sineBetween } from '../geometry/on-piece.ts';
import { directionOf, neighbourPiece, type Pieces } from '../geometry/pieces.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { closestPoints, type Line, stretchWithin } from './closest.ts';
import type { FindingContext } from './context.ts';
import { gapBetween, hasFlatEnd, lineOf } from './painted.ts';

/** Two straight pieces nearer than the limit, and what one sees of the other. */
export interface FacedWalls {
  readonly pieces: Pieces;
  readonly i: number;
  readonly j: number;
  readonly limitMm: number;
  readonly apartMm: number;
  /** Extent on i of what is thin, and where the two are nearest; positions on i's centreline. */
  readonly thinFrom: number;
  readonly thinTo: number;
  readonly nearestAt: number;
  /** Material between painted ends that face each other, mm; −∞ where that between the pieces tells. */
  readonly exactMm: number;
  /** Cosine of the angle between the two, and where i's first point lies along j, mm. */
  readonly slope: number;
  readonly offset: number;
}

/** Null where the two are no wall, whatever else is near. */
export function facedWalls(
  { chip }: FindingContext,
  near: Nearness,
  k: number,
  limitMm: number,
): FacedWalls | null {
  const { pieces } = near;
  const i = near.pairA[k];
  const j = near.pairB[k];
  const distanceMm = near.pairDistance[k];
  const { half, start, length } = pieces;
  const halves = half[i] + half[j];
  // The relative slack of a limit, rounding of coordinates where the limit is nought, and what curves may lie beside their
  // pieces: a wall round a bend drawn exactly at the limit is not below it.
  const roundingMm = limitMm === 0 ? -1e-9 * halves : 0;
  const withinMm = halves + limitMm * (1 - LIMIT_SLACK) - roundingMm - pieces.bulge[i] - pieces.bulge[j];
  const flat = hasFlatEnd(chip, pieces, i) || hasFlatEnd(chip, pieces, j);
  if (!flat && distanceMm >= withinMm) return null;
  if (distanceMm <= chip.joinWithinMm && Math.abs(sineBetween(pieces, i, j)) >= SQUARE_SINE) return null;
  const apartMm = 4 * (halves + limitMm);
  const isOwn = pieces.centreline[i] === pieces.centreline[j];
  if (isOwn && start[j] + length[j] - start[i] <= apartMm) return null;
  const one = lineOf(pieces, i);
  const two = lineOf(pieces, j);
  const { x1, y1, x2, y2 } = closestPoints(one, two);
  // Half a width round the centreline is the painted area but for the square ends: where these face, they are measured.
  const areFaced = flat && distanceMm > 0 && (isAtEnd(one, x1, y1) || isAtEnd(two, x2, y2));
  const exactMm = areFaced ? gapBetween(chip, pieces, i, j).distanceMm : Number.NEGATIVE_INFINITY;
  if (areFaced ? exactMm >= withinMm - halves : distanceMm >= withinMm) return null;
  const nearestAt = start[i] + Math.hypot(x1 - one[0], y1 - one[1]);
  const thin = stretchWithin(one, two, withinMm);
  const [ux, uy] = directionOf(pieces, i);
  const [vx, vy] = directionOf(pieces, j);
  return {
    pieces,
    i,
    j,
    limitMm,
    apartMm,
    thinFrom: thin === null ? nearestAt : start[i] + thin[0],
    thinTo: thin === null ? nearestAt : start[i] + thin[1],
    nearestAt,
    exactMm,
    slope: ux * vx + uy * vy,
    offset: (one[0] - two[0]) * vx + (one[1] - two[1]) * vy,
  };
}

/** The position on j's centreline that a position on i's faces. */
export function facing({ pieces, i, j, slope, offset }: FacedWalls, s: number): number {
  return pieces.start[j] + Math.min(pieces.length[j], Math.max(0, offset + slope * (s - pieces.start[i])));
}

/** Material between the two at a position on i's centreline, mm. */
export function gapAt({ pieces, i, j, exactMm }: FacedWalls, s: number): number {
  const [ux, uy] = directionOf(pieces, i);
  const t = s - pieces.start[i];
  const distanceMm = distanceToPiece(pieces, j, pieces.x1[i] + ux * t, pieces.y1[i] + uy * t);
  return Math.max(distanceMm - (pieces.half[i] + pieces.half[j]), exactMm);
}

/**
 * Straight pieces that meet at an angle α are thin up to R/sin α from there, R being both halves and the limit, and there
 * the way along the channels is R cot(α/2): never over the 4 R that make a wall when tan(α/2) is 1/4 or more.
 * sin α for tan(α/2) = t is 2t/(1 + t²).
 */
const SQUARE_SINE = 0.5 / (1 + 1 / 16);

function isAtEnd([ax, ay, bx, by]: Line, x: number, y: number): boolean {
  return (x === ax && y === ay) || (x === bx && y === by);
}

/**
 * Whether a place s on piece i faces piece j: no nearer place lies next to it on one of j's neighbours, and it does not look
 * along its own strip at a square end that stands in it. The answer changes only at `cuts`.
 */
export function facingTest(
  { chip }: FindingContext,
  pieces: Pieces,
  i: number,
  j: number,
): { readonly cuts: readonly number[]; readonly at: (s: number) => boolean } {
  const [ux, uy] = directionOf(pieces, i);
  const [vx, vy] = directionOf(pieces, j);
  const cuts: number[] = [];
  const start = sideOf(pieces.x1[j], pieces.y1[j], -vx, -vy, neighbourPiece(pieces, j, -1));
  const end = sideOf(pieces.x2[j], pieces.y2[j], vx, vy, neighbourPiece(pieces, j, 1));
  return { cuts, at: (s) => start(s) && end(s) };

  /** One end of j: out of it points (ox, oy), and its neighbour there goes on in its own direction. */
  function sideOf(x: number, y: number, ox: number, oy: number, next: number): (s: number) => boolean {
    const beyond = alongLine(x, y, ox, oy);
    if (next < 0) {
      const isInside = isInPieceStrip(pieces, i, x, y, chip.joinWithinMm, null);
      return (s) => !isInside || beyond(s) <= 0;
    }
    const sign = Math.hypot(pieces.x1[next] - x, pieces.y1[next] - y) < 1e-12 ? 1 : -1;
    const [nx, ny] = directionOf(pieces, next);
    const onNext = alongLine(x, y, sign * nx, sign * ny);
    return (s) => beyond(s) <= 0 || onNext(s) <= 0;
  }

  /** How far beyond (x, y) in a direction the place s lies; its change of sign is a cut. */
  function alongLine(x: number, y: number, dx: number, dy: number): (s: number) => number {
    const atStart = (pieces.x1[i] - x) * dx + (pieces.y1[i] - y) * dy;
    const slope = ux * dx + uy * dy;
    if (Math.abs(slope) > 1e-12) cuts.push(pieces.start[i] - atStart / slope);
    return (s) => atStart + slope * (s - pieces.start[i]);
  }
}
