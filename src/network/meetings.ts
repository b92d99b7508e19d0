import { endsAtDrawnVertex, startsAtDrawnVertex } from '../geometry/pieces.ts';
import { distanceToSegment, nearestParameter } from '../geometry/segment.ts';
import type { Draft } from './draft.ts';

/**
 * Rule 2: two centrelines, or two stretches of one, join where they meet or cross, drawn vertex or not.
 *
 * A proper crossing is computed exactly. An inner vertex within slack of another piece touches it. The ends of channels
 * are not looked at here unless they lie on the other centreline to the last bit: rule 3 carries them on to the exact
 * place, so that slack never enters a length.
 */
export function markMeetings(draft: Draft): void {
  const { near, slackMm } = draft;
  const { pairA, pairB, pairDistance } = near;
  for (let k = 0; k < near.pairCount; k++) {
    if (pairDistance[k] > slackMm) continue;
    if (!markCrossing(draft, pairA[k], pairB[k])) {
      markTouches(draft, pairA[k], pairB[k]);
      markTouches(draft, pairB[k], pairA[k]);
    }
  }
}

function markCrossing(draft: Draft, i: number, j: number): boolean {
  const { pieces } = draft;
  const ax = pieces.x1[i];
  const ay = pieces.y1[i];
  const cx = pieces.x1[j];
  const cy = pieces.y1[j];
  const ux = pieces.x2[i] - ax;
  const uy = pieces.y2[i] - ay;
  const vx = pieces.x2[j] - cx;
  const vy = pieces.y2[j] - cy;
  const cross = ux * vy - uy * vx;
  // Parallel to within rounding of the direction: no single crossing point, the vertices tell (markTouches).
  if (Math.abs(cross) <= 1e-12 * pieces.length[i] * pieces.length[j]) return false;
  const wx = cx - ax;
  const wy = cy - ay;
  const s = (wx * vy - wy * vx) / cross;
  const t = (wx * uy - wy * ux) / cross;
  if (!(s >= 0 && s <= 1 && t >= 0 && t <= 1)) return false;
  addMeeting(draft, i, s, j, t);
  return true;
}

/** Inner vertices of piece i that lie on piece j within slack. */
function markTouches(draft: Draft, i: number, j: number): void {
  const { pieces } = draft;
  if (startsAtDrawnVertex(pieces, i)) markTouch(draft, i, 0, pieces.x1[i], pieces.y1[i], j);
  if (endsAtDrawnVertex(pieces, i)) markTouch(draft, i, 1, pieces.x2[i], pieces.y2[i], j);
}

function markTouch(draft: Draft, i: number, s: number, x: number, y: number, j: number): void {
  const { pieces, slackMm } = draft;
  const ax = pieces.x1[j];
  const ay = pieces.y1[j];
  const bx = pieces.x2[j];
  const by = pieces.y2[j];
  if (distanceToSegment(x, y, ax, ay, bx, by) > slackMm) return;
  addMeeting(draft, i, s, j, nearestParameter(x, y, ax, ay, bx, by));
}

function addMeeting(draft: Draft, i: number, s: number, j: number, t: number): void {
  const { pieces, marks, nodes } = draft;
  const node = nodes.add();
  marks.addMeeting(pieces.centreline[i], pieces.start[i] + s * pieces.length[i], node);
  marks.addMeeting(pieces.centreline[j], pieces.start[j] + t * pieces.length[j], node);
}
