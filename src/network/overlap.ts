import { distanceToPiece } from '../geometry/on-piece.ts';
import { endPiece, pieceAt } from '../geometry/pieces.ts';
import { type Groups, itemsOf } from '../groups.ts';
import { type Bundles, bundleAt } from './bundles.ts';
import { type Draft, drawnPosition, endPosition, pointAt, ROUNDING_MM } from './draft.ts';
import { isEqualSize } from './equal-ducts.ts';
import { endAtStop, type Part } from './kept.ts';
import { runsAlong } from './runs-along.ts';
import { outermostStop, type Stops, stopPosition } from './stops.ts';

/** All that was joined before anything is left out. */
export interface Joined {
  readonly draft: Draft;
  readonly bundles: Bundles;
  readonly stops: Stops;
  readonly whole: Part;
  /** The stops of each node. */
  readonly byNode: Groups;
}

/**
 * Rule 4, overlap: where the end piece of a joined end begins that runs along the channel it joined, or along one that ends
 * at the same place; null where none does.
 */
export function findOverlapCut(joined: Joined, end: number): number | null {
  const { draft, stops, bundles } = joined;
  const { joinedTo } = draft.ends;
  const twin = twinOf(draft, end);
  if (twin >= 0) return findTwinCut(draft, stops, end, twin);
  const { centrelineChannel } = draft.pieces;
  const other = joinedTo[end];
  const isJoined = (line: number): boolean => centrelineChannel[line] === centrelineChannel[other];
  const cut = other < 0 ? null : findOverlap(joined, end, endPosition(draft, end), other, isJoined);
  if (cut !== null) return cut;
  for (const member of bundleAt(bundles, end)) {
    const isMember = (line: number): boolean => line === member >> 1;
    const along = findOverlap(joined, end, drawnPosition(draft, end), member >> 1, isMember);
    if (along !== null) return along;
  }
  return null;
}

/** From a position back to the last join with the other's strokes, when the end piece runs along those. */
function findOverlap(
  joined: Joined,
  end: number,
  from: number,
  other: number,
  isOther: (line: number) => boolean,
): number | null {
  const { draft, stops, whole, byNode } = joined;
  const { pieces } = draft;
  const c = end >> 1;
  if (other === c) return null;
  const width = 2 * pieces.half[endPiece(pieces, end)];
  const otherWidth = 2 * pieces.half[pieces.firstPiece[other]];
  const limit = 2 * Math.max(width, otherWidth) + draft.slackMm;
  const step = (end & 1) === 0 ? 1 : -1;
  for (
    let k = outermostStop(stops, end) + step;
    k >= stops.firstStop[c] && k < stops.firstStop[c + 1];
    k += step
  ) {
    const position = stopPosition(stops, k, end);
    if (Math.abs(position - from) > limit) return null;
    let meets = false;
    let otherEnd = -1;
    for (const stop of itemsOf(byNode, draft.nodes.find(stops.node[k]))) {
      const line = stops.centreline[stop];
      if (line === c || !isOther(line)) continue;
      if (line !== other && !isBesidePiece(draft, c, from, position, line, stops.from[stop])) continue;
      meets = true;
      const e = endAtStop(draft, stops, whole, stop);
      if (e >= 0) otherEnd = e;
    }
    if (!meets) continue;
    const others = { isOne: isOther, carriedEnd: otherEnd, withinMm: Math.min(width, otherWidth) / 2 };
    if (!runsAlong(draft, c, position, from, others)) return null;
    if (otherEnd >= 0) {
      // Two end pieces overlap: only the narrower channel's, of equal ones the later drawn, is left out.
      const channel = pieces.centrelineChannel[c];
      const otherChannel = pieces.centrelineChannel[other];
      const isLater = channel > otherChannel || (channel === otherChannel && c > other);
      if (isEqualSize(width, otherWidth) ? !isLater : width > otherWidth) return null;
    }
    return position;
  }
  return null;
}

/**
 * Whether a line that meets an end piece at its join comes along it, rather than going on from there: another stroke of the
 * channel that the piece runs along, which hangs on this one, is no reason to leave it out. A line within 15° of the piece
 * is nearer to its middle than the join is; one that goes on is not.
 */
function isBesidePiece(
  draft: Draft,
  c: number,
  from: number,
  position: number,
  line: number,
  joinAt: number,
): boolean {
  const { pieces } = draft;
  const span = Math.abs(position - from);
  const middle = pointAt(draft, c, (from + position) / 2);
  // Along the piece it is as long as the piece, but for 15°: what is further along it is not looked at.
  const total = pieces.centrelineLength[line];
  const rounds = pieces.centrelineClosed[line] === 1 ? [-total, 0, total] : [0];
  return rounds.some((shift) => {
    const low = Math.max(0, joinAt + shift - 2 * span - draft.slackMm);
    const high = joinAt + shift + 2 * span + draft.slackMm;
    const end = pieces.firstPiece[line + 1];
    for (let i = pieceAt(pieces, line, low); i < end && pieces.start[i] <= high; i++) {
      if (distanceToPiece(pieces, i, middle.x, middle.y) <= span / 4 + draft.slackMm) return true;
    }
    return false;
  });
}

/**
 * The end of another centreline that was carried on to this drawn end while this one was carried on to it, −1 for none:
 * two strokes that miss each other sideways inside their strips are joined by one straight piece, not by two.
 */
function twinOf(draft: Draft, end: number): number {
  const { ends } = draft;
  const other = ends.joinedTo[end];
  if (other < 0 || ends.extension[end] <= draft.slackMm) return -1;
  for (const twin of [2 * other, 2 * other + 1]) {
    if (ends.joinedTo[twin] !== end >> 1 || ends.extension[twin] <= draft.slackMm) continue;
    const away = Math.hypot(ends.tipX[end] - ends.x[twin], ends.tipY[end] - ends.y[twin]);
    const back = Math.hypot(ends.tipX[twin] - ends.x[end], ends.tipY[twin] - ends.y[end]);
    if (away <= draft.slackMm && back <= draft.slackMm) return twin;
  }
  return -1;
}

/** Of two pieces carried on to each other's drawn ends, the narrower channel's (of equal ones the later drawn) is left out. */
function findTwinCut(draft: Draft, stops: Stops, end: number, twin: number): number | null {
  const { pieces, ends } = draft;
  const [c, other] = [end >> 1, twin >> 1];
  const own = pieces.half[endPiece(pieces, end)];
  const its = pieces.half[endPiece(pieces, twin)];
  if (isEqualSize(own, its) ? c < other : own > its) return null;
  const drawn = drawnPosition(draft, end);
  for (let k = stops.firstStop[c]; k < stops.firstStop[c + 1]; k++) {
    const isAtTip = Math.abs(stops.from[k] - drawn) >= ends.extension[end] - ROUNDING_MM;
    if (!isAtTip && Math.abs(stops.from[k] - drawn) <= draft.slackMm) return stops.from[k];
  }
  return null;
}
