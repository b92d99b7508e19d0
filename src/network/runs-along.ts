import { piecesNear } from '../geometry/near.ts';
import { distanceToPiece } from '../geometry/on-piece.ts';
import { endPiece, pieceAt } from '../geometry/pieces.ts';
import { distanceToSegment } from '../geometry/segment.ts';
import { type Draft, isCarriedStraightOn, type Point, pointAt } from './draft.ts';
import { piecesNearExtension } from './strips.ts';

/** Two strokes that run within this angle of each other run along each other (rule 4). */
const ALONG_RAD = (15 * Math.PI) / 180;
const MOST_SINE = Math.sin(ALONG_RAD) * (1 + 1e-9);

/** The strokes that a piece may run along. */
export interface OtherStrokes {
  readonly isOne: (centreline: number) => boolean;
  /** An end of theirs: what it was carried on by counts with them; −1 for none. */
  readonly carriedEnd: number;
  /** How far from them the piece may lie. */
  readonly withinMm: number;
}

/**
 * Whether a centreline between two positions stays as near to others as they ask and within 15° of them; what its own end
 * was carried on by counts with it.
 */
export function runsAlong(draft: Draft, c: number, s1: number, s2: number, others: OtherStrokes): boolean {
  const { pieces, slackMm } = draft;
  const low = Math.min(s1, s2);
  const high = Math.max(s1, s2);
  const length = pieces.centrelineLength[c];
  let runs = 0;
  const isBeside = (a: number, b: number, stretch: Stretch): boolean => {
    if (b - a <= slackMm) return true;
    runs += b - a;
    return [a, (a + b) / 2, b].every((s) => isAlong(draft, c, s, stretch, others));
  };
  // A short step aside, to the nearest point, joins the two and runs along nothing.
  if (low < 0 && isCarriedStraightOn(draft, 2 * c)) {
    if (!isBeside(low, Math.min(0, high), carriedOn(draft, 2 * c))) return false;
  }
  if (high > length && isCarriedStraightOn(draft, 2 * c + 1)) {
    if (!isBeside(Math.max(length, low), high, carriedOn(draft, 2 * c + 1))) return false;
  }
  for (let i = pieceAt(pieces, c, low); i < pieces.firstPiece[c + 1] && pieces.start[i] < high; i++) {
    const a = Math.max(low, pieces.start[i]);
    const b = Math.min(high, pieces.start[i] + pieces.length[i]);
    if (!isBeside(a, b, drawnPiece(draft, i))) return false;
  }
  return runs > slackMm;
}

/** A straight piece of a centreline, drawn or carried on: its direction, and what comes near it. */
interface Stretch {
  readonly ux: number;
  readonly uy: number;
  readonly near: readonly number[];
}

function drawnPiece({ pieces, near }: Draft, i: number): Stretch {
  return {
    ux: (pieces.x2[i] - pieces.x1[i]) / pieces.length[i],
    uy: (pieces.y2[i] - pieces.y1[i]) / pieces.length[i],
    near: piecesNear(near, i),
  };
}

/** What an end was carried on by. */
function carriedOn(draft: Draft, end: number): Stretch {
  const { ends, pieces } = draft;
  return {
    ux: (ends.tipX[end] - ends.x[end]) / ends.extension[end],
    uy: (ends.tipY[end] - ends.y[end]) / ends.extension[end],
    // What the end lies in, and that channel's pieces that it was carried on to.
    near: piecesNearExtension(draft, end, pieces.half[endPiece(pieces, end)]),
  };
}

function isAlong(draft: Draft, c: number, s: number, stretch: Stretch, others: OtherStrokes): boolean {
  const { pieces, slackMm } = draft;
  const at = pointAt(draft, c, s);
  const near = stretch.near.filter((j) => pieces.centreline[j] !== c && others.isOne(pieces.centreline[j]));
  const distanceTo = (j: number): number => distanceToPiece(pieces, j, at.x, at.y);
  const best = near.reduce((least, j) => Math.min(least, distanceTo(j)), Number.POSITIVE_INFINITY);
  // At a corner of the other both its legs are as near, to within rounding: one that runs along is enough.
  const runsWith = (j: number): boolean => {
    const vx = pieces.x2[j] - pieces.x1[j];
    const vy = pieces.y2[j] - pieces.y1[j];
    return distanceTo(j) <= best + slackMm && isWithinAngle(stretch, vx, vy, pieces.length[j]);
  };
  if (best <= others.withinMm + slackMm && near.some(runsWith)) return true;
  return isAlongExtension(draft, stretch, at, others);
}

/** The same beside what an end was carried on by. */
function isAlongExtension(
  { ends, slackMm }: Draft,
  stretch: Stretch,
  { x, y }: Point,
  { carriedEnd: end, withinMm }: OtherStrokes,
): boolean {
  if (end < 0 || ends.extension[end] <= slackMm) return false;
  const vx = ends.tipX[end] - ends.x[end];
  const vy = ends.tipY[end] - ends.y[end];
  const distance = distanceToSegment(x, y, ends.x[end], ends.y[end], ends.tipX[end], ends.tipY[end]);
  return distance <= withinMm + slackMm && isWithinAngle(stretch, vx, vy, ends.extension[end]);
}

function isWithinAngle({ ux, uy }: Stretch, vx: number, vy: number, length: number): boolean {
  return Math.abs((ux * vy - uy * vx) / length) <= MOST_SINE;
}
