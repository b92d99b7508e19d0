import { piecesNear } from '../geometry/near.ts';
import { distanceToPiece, nearestShare, type PlaceOn, placeOn } from '../geometry/on-piece.ts';
import { endPiece } from '../geometry/pieces.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import type { Bundles } from './bundles.ts';
import { type Draft, isFarBack } from './draft.ts';

/** A strip that holds an end, which so may join it (rule 3). */
export interface Candidate {
  readonly centreline: number;
  /** The piece of it that is nearest to the end. */
  readonly piece: number;
  readonly distance: number;
}

/** The strips that hold the end, but those of its own bundle, nearest centreline first. */
export function candidatesOf(draft: Draft, bundles: Bundles, end: number): Candidate[] {
  const { near, pieces, ends, slackMm } = draft;
  const [x, y] = [ends.x[end], ends.y[end]];
  const nearest = new Map<number, Candidate>();
  for (const piece of piecesNear(near, endPiece(pieces, end))) {
    if (!isInPieceStrip(pieces, piece, x, y, slackMm, null)) continue;
    const centreline = pieces.centreline[piece];
    if (isInBundle(bundles, end, centreline)) continue;
    if (centreline === end >> 1 && !isFarBack(draft, end, piece)) continue;
    const distance = distanceToPiece(pieces, piece, x, y);
    if (distance < (nearest.get(centreline)?.distance ?? Number.POSITIVE_INFINITY)) {
      nearest.set(centreline, { centreline, piece, distance });
    }
  }
  return [...nearest.values()].sort((a, b) => a.distance - b.distance || a.centreline - b.centreline);
}

/** Whether another end of a centreline stands at the same place. */
function isInBundle({ around }: Bundles, end: number, centreline: number): boolean {
  if (around[end] < 0) return false;
  return [2 * centreline, 2 * centreline + 1].some((e) => e !== end && around[e] === around[end]);
}

/** An end on a centreline within the slack is carried on at most this many slacks. */
const FLAT = 4;

/** The place on the candidate's centreline that the end joins. */
export function carryOn(draft: Draft, end: number, { centreline, piece, distance }: Candidate): PlaceOn {
  const { pieces, ends, near, slackMm } = draft;
  const [x, y] = [ends.x[end], ends.y[end]];
  const [ox, oy] = [pieces.outX[end], pieces.outY[end]];
  // On the centreline within the slack it has met it there, however flat the angle: no place far ahead.
  const reach = distance <= slackMm ? FLAT * slackMm : 2 * pieces.half[piece] + slackMm;
  let best = Number.POSITIVE_INFINITY;
  let place = placeOn(pieces, piece, nearestShare(pieces, piece, x, y));
  const found = near.index.search(
    Math.min(x, x + ox * reach),
    Math.min(y, y + oy * reach),
    Math.max(x, x + ox * reach),
    Math.max(y, y + oy * reach),
    (i) => pieces.centreline[i] === centreline,
  );
  for (const i of found) {
    if (centreline === end >> 1 && i === endPiece(pieces, end)) continue;
    const vx = pieces.x2[i] - pieces.x1[i];
    const vy = pieces.y2[i] - pieces.y1[i];
    const cross = ox * vy - oy * vx;
    if (Math.abs(cross) <= 1e-12 * pieces.length[i]) continue;
    const wx = pieces.x1[i] - x;
    const wy = pieces.y1[i] - y;
    const t = (wx * vy - wy * vx) / cross;
    const s = (wx * oy - wy * ox) / cross;
    const tolerance = slackMm / pieces.length[i];
    if (t < -slackMm || t > reach || s < -tolerance || s > 1 + tolerance) continue;
    const share = Math.min(1, Math.max(0, s));
    // A hit just past a vertex gives way to one on the piece that goes on from there.
    const rank = share === s ? t : t + slackMm;
    if (rank >= best) continue;
    best = rank;
    place = placeOn(pieces, i, share);
  }
  return place;
}
