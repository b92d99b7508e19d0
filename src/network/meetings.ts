import { crossingShare, distanceToPiece, nearestShare, placeOn, sineBetween } from '../geometry/on-piece.ts';
import {
  endsAtVertex,
  goesOnSmoothly,
  neighbourPiece,
  type Pieces,
  startsAtVertex,
} from '../geometry/pieces.ts';
import { type Draft, ROUNDING_MM } from './draft.ts';

/**
 * Rule 2: two centrelines, or two stretches of one, join where they meet or cross, drawn vertex or not.
 *
 * A proper crossing is computed exactly. An inner vertex within slack of another piece touches it; of the vertices that a
 * curve was cut at only the one where it comes nearest. The ends of channels
 * are not looked at here unless they lie on the other centreline to the last bit: rule 3 carries them on to the exact
 * place, so that slack never enters a length.
 */
export function markMeetings(draft: Draft): void {
  const { near, slackMm } = draft;
  const { pairA, pairB, pairDistance } = near;
  for (let k = 0; k < near.pairCount; k++) {
    if (pairDistance[k] > slackMm) continue;
    const [i, j] = [pairA[k], pairB[k]];
    const isAlong = lieAlong(draft.pieces, i, j);
    if (isAlong && (markAllTouches(draft, i, j) || hasOpenEndBeside(draft, i, j))) continue;
    if (!markCrossing(draft, i, j) && !isAlong) markAllTouches(draft, i, j);
  }
}

function markCrossing(draft: Draft, i: number, j: number): boolean {
  const { pieces } = draft;
  // Parallel to within rounding of the direction: no single crossing point, the vertices tell (markTouches).
  if (Math.abs(sineBetween(pieces, i, j)) <= 1e-12) return false;
  const s = crossingShare(pieces, i, j);
  if (Number.isNaN(s)) return false;
  addMeeting(draft, i, s, j, crossingShare(pieces, j, i));
  return true;
}

/**
 * Whether a stroke ends with one piece within the slack of the other. Of two pieces that lie on each other the place where
 * they cross is little more than rounding (the error of a coordinate over the sine: 1e-4 mm and more). Where a vertex lies
 * beside the other it tells the place; an end that does is joined by rule 3.
 */
function hasOpenEndBeside({ pieces, slackMm }: Draft, i: number, j: number): boolean {
  const endsBeside = (k: number, other: number): boolean =>
    (!startsAtVertex(pieces, k) && distanceToPiece(pieces, other, pieces.x1[k], pieces.y1[k]) <= slackMm) ||
    (!endsAtVertex(pieces, k) && distanceToPiece(pieces, other, pieces.x2[k], pieces.y2[k]) <= slackMm);
  return endsBeside(i, j) || endsBeside(j, i);
}

/** Whether any vertex of one piece was found to touch the other. */
function markAllTouches(draft: Draft, i: number, j: number): boolean {
  const before = draft.marks.node.length;
  markTouches(draft, i, j);
  markTouches(draft, j, i);
  return draft.marks.node.length > before;
}

/** Inner vertices of piece i that lie on piece j within slack. */
function markTouches(draft: Draft, i: number, j: number): void {
  const { pieces } = draft;
  if (startsAtVertex(pieces, i)) markTouch(draft, i, 0, pieces.x1[i], pieces.y1[i], j);
  if (endsAtVertex(pieces, i)) markTouch(draft, i, 1, pieces.x2[i], pieces.y2[i], j);
}

function markTouch(draft: Draft, i: number, s: number, x: number, y: number, j: number): void {
  const { pieces, slackMm } = draft;
  if (distanceToPiece(pieces, j, x, y) > slackMm) return;
  const t = nearestShare(pieces, j, x, y);
  const nearest = placeOn(pieces, j, t);
  if (isPassedOnCurve(pieces, i, s, j, x - nearest.x, y - nearest.y)) return;
  addMeeting(draft, i, s, j, t);
}

/** Two pieces that differ by less in direction lie on each other. */
const SAME_DIRECTION_SINE = 1e-6;

/**
 * Whether the vertex at one end of piece i (s = 0 or 1) is but a point of a curve that is on its way to or from piece j.
 * Such a vertex is where the curve was cut, not where it was drawn to meet: a curve meets where it comes nearest.
 */
function isPassedOnCurve(
  pieces: Pieces,
  i: number,
  s: number,
  j: number,
  awayX: number,
  awayY: number,
): boolean {
  const next = neighbourPiece(pieces, i, s === 0 ? -1 : 1);
  if (next < 0 || !goesOnSmoothly(pieces, i, next)) return false;
  const [before, after] = s === 0 ? [next, i] : [i, next];
  const isFineCut = pieces.chord[before] === pieces.chord[after];
  // On the piece: which way the distance grows is only rounding.
  if (Math.hypot(awayX, awayY) <= ROUNDING_MM) return isFineCut && lieAlong(pieces, i, j);
  // Seen across piece j: its nearest point may be a vertex, though its curve goes on and passes nearer.
  const side = (pieces.x2[j] - pieces.x1[j]) * awayY - (pieces.y2[j] - pieces.y1[j]) * awayX;
  const arriving = side * sineBetween(pieces, j, before);
  const leaving = side * sineBetween(pieces, j, after);
  return isFineCut ? !(arriving < 0 && leaving > 0) : !(arriving <= 0 && leaving >= 0);
}

/** Whether two pieces run in one direction, but for rounding: where they meet they lie on each other, and need not cross. */
export function lieAlong(pieces: Pieces, i: number, j: number): boolean {
  return Math.abs(sineBetween(pieces, i, j)) <= SAME_DIRECTION_SINE;
}

function addMeeting(draft: Draft, i: number, s: number, j: number, t: number): void {
  const { pieces, marks, nodes } = draft;
  const node = nodes.add();
  marks.addMeeting(pieces.centreline[i], pieces.start[i] + s * pieces.length[i], node);
  marks.addMeeting(pieces.centreline[j], pieces.start[j] + t * pieces.length[j], node);
}
