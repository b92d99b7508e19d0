import { pieceAt } from '../geometry/pieces.ts';
import { distanceToSegment, nearestParameter } from '../geometry/segment.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import type { Bundles } from './bundles.ts';
import {
  type Draft,
  drawnPosition,
  END_FREE,
  END_JOINED,
  endPiece,
  endPosition,
  isCarriedStraightOn,
  pointAt,
} from './draft.ts';
import { isEqualSize } from './equal-ducts.ts';
import type { Kept, LeftOut } from './kept.ts';
import { type NodeStops, type Stops, stopsByNode } from './stops.ts';
import { piecesNearExtension } from './strips.ts';

/** Far below anything drawn, far above rounding. */
const ROUNDING_MM = 1e-9;

/** Two strokes that run within this angle of each other run along each other (rule 4). */
const ALONG_RAD = (15 * Math.PI) / 180;
const MOST_SINE = Math.sin(ALONG_RAD) * (1 + 1e-9);

/**
 * Rule 4 and the last sentence of rule 6: an end piece that ends dead inside the strip it joined is left out; so is one
 * that runs along another channel's centreline for at most twice the wider width between two joins (of two that overlap
 * so, the narrower channel's, of equal ones the later drawn); so is a stub beyond a rim no longer than the larger of its
 * width and the port's radius.
 */
export function leaveOutEndPieces(draft: Draft, stops: Stops, bundles: Bundles): Kept {
  const { pieces } = draft;
  const n = pieces.centrelineCount;
  const kept = {
    from: new Float64Array(n),
    to: new Float64Array(n),
    leftOutMm: new Float64Array(2 * n),
    leftOutBy: new Array<LeftOut>(2 * n).fill(null),
  };
  for (let c = 0; c < n; c++) {
    const closed = pieces.centrelineClosed[c] === 1;
    kept.from[c] = closed ? 0 : endPosition(draft, 2 * c);
    kept.to[c] = closed ? pieces.centrelineLength[c] : endPosition(draft, 2 * c + 1);
  }
  const byNode = stopsByNode(draft, stops, kept.from, kept.to);
  for (let c = 0; c < n; c++) {
    if (pieces.centrelineClosed[c] === 1 || stops.firstStop[c] === stops.firstStop[c + 1]) continue;
    for (const end of [2 * c, 2 * c + 1]) {
      const cut = findCut(draft, stops, byNode, bundles, end);
      if (cut === null) continue;
      kept.leftOutMm[end] = Math.abs(endPosition(draft, end) - cut.position);
      kept.leftOutBy[end] = cut.why;
      if (end === 2 * c) kept.from[c] = cut.position;
      else kept.to[c] = cut.position;
    }
  }
  return kept;
}

interface Cut {
  readonly position: number;
  readonly why: LeftOut;
}

function findCut(draft: Draft, stops: Stops, byNode: NodeStops, bundles: Bundles, end: number): Cut | null {
  if (draft.ends.state[end] === END_JOINED) return findOverlapCut(draft, stops, byNode, bundles, end);
  if (draft.ends.state[end] === END_FREE) return findDeadPiece(draft, stops, byNode, end);
  return null;
}

function findDeadPiece(draft: Draft, stops: Stops, byNode: NodeStops, end: number): Cut | null {
  const { pieces, ends, slackMm } = draft;
  const c = end >> 1;
  const stop = (end & 1) === 0 ? stops.firstStop[c] : stops.firstStop[c + 1] - 1;
  const position = (end & 1) === 0 ? stops.from[stop] : stops.to[stop];
  const length = Math.abs(endPosition(draft, end) - position);
  if (length <= slackMm) return length > 0 ? { position, why: 'overshoot' } : null;
  const node = draft.nodes.find(stops.node[stop]);
  if (stops.isWell[stop] === 1 && node < draft.portCount) {
    const width = 2 * pieces.half[endPiece(pieces, end)];
    if (length <= Math.max(width, draft.chip.ports[node].radiusMm) + slackMm)
      return { position, why: 'well-stub' };
  }
  const channels = new Set<number>();
  let meetsItself = false;
  for (let k = byNode.first[node]; k < byNode.first[node + 1]; k++) {
    const other = stops.centreline[byNode.stop[k]];
    if (other !== c) channels.add(pieces.centrelineChannel[other]);
    else if (byNode.stop[k] !== stop) meetsItself = true;
  }
  const piece = endPiece(pieces, end);
  for (let k = draft.near.firstPair[piece]; k < draft.near.firstPair[piece + 1]; k++) {
    const pair = draft.near.pairOf[k];
    const other = draft.near.pairA[pair] === piece ? draft.near.pairB[pair] : draft.near.pairA[pair];
    const isOwn = pieces.centreline[other] === c;
    if (isOwn ? !(meetsItself && isFarBack(draft, end, other)) : !channels.has(pieces.channel[other]))
      continue;
    if (isInPieceStrip(pieces, other, ends.x[end], ends.y[end], slackMm, null))
      return { position, why: 'overshoot' };
  }
  return null;
}

/** Whether a piece of the end's own centreline passes it more than two widths back along it (rule 3). */
function isFarBack(draft: Draft, end: number, piece: number): boolean {
  const { pieces, ends } = draft;
  const t = nearestParameter(
    ends.x[end],
    ends.y[end],
    pieces.x1[piece],
    pieces.y1[piece],
    pieces.x2[piece],
    pieces.y2[piece],
  );
  const along = Math.abs(pieces.start[piece] + t * pieces.length[piece] - endPosition(draft, end));
  return along > 4 * pieces.half[piece];
}

/** The end piece of a joined end that runs along the channel it joined, or along one that ends at the same place. */
function findOverlapCut(
  draft: Draft,
  stops: Stops,
  byNode: NodeStops,
  { of, first, member }: Bundles,
  end: number,
): Cut | null {
  const { ends } = draft;
  const twin = twinOf(draft, end);
  if (twin >= 0) return findTwinCut(draft, stops, end, twin);
  const { centrelineChannel } = draft.pieces;
  const joined = ends.joinedTo[end];
  const isJoined = (line: number): boolean => centrelineChannel[line] === centrelineChannel[joined];
  const cut =
    joined < 0 ? null : findOverlap(draft, stops, byNode, end, endPosition(draft, end), joined, isJoined);
  if (cut !== null || of[end] < 0) return cut;
  for (let k = first[of[end]]; k < first[of[end] + 1]; k++) {
    const other = member[k] >> 1;
    const isOther = (line: number): boolean => line === other;
    const along = findOverlap(draft, stops, byNode, end, drawnPosition(draft, end), other, isOther);
    if (along !== null) return along;
  }
  return null;
}

/** The end piece from a position back to the last join with the other's strokes, when it runs along those. */
function findOverlap(
  draft: Draft,
  stops: Stops,
  byNode: NodeStops,
  end: number,
  from: number,
  other: number,
  isOther: (line: number) => boolean,
): Cut | null {
  const { pieces } = draft;
  const c = end >> 1;
  if (other === c) return null;
  const width = 2 * pieces.half[endPiece(pieces, end)];
  const otherWidth = 2 * pieces.half[pieces.firstPiece[other]];
  const limit = 2 * Math.max(width, otherWidth) + draft.slackMm;
  const atStart = (end & 1) === 0;
  const outermost = atStart ? stops.firstStop[c] : stops.firstStop[c + 1] - 1;
  const step = atStart ? 1 : -1;
  for (let k = outermost + step; k >= stops.firstStop[c] && k < stops.firstStop[c + 1]; k += step) {
    const position = atStart ? stops.from[k] : stops.to[k];
    if (Math.abs(position - from) > limit) return null;
    const node = draft.nodes.find(stops.node[k]);
    let meets = false;
    let otherEnd = -1;
    for (let m = byNode.first[node]; m < byNode.first[node + 1]; m++) {
      const stop = byNode.stop[m];
      const line = stops.centreline[stop];
      if (line === c || !isOther(line)) continue;
      if (line !== other && !isBesidePiece(draft, c, from, position, line, stops.from[stop])) continue;
      meets = true;
      const e = endAt(draft, stops, stop);
      if (e >= 0) otherEnd = e;
    }
    if (!meets) continue;
    const within = Math.min(width, otherWidth) / 2;
    if (!runsAlong(draft, c, position, from, isOther, otherEnd, within)) return null;
    if (otherEnd >= 0) {
      // Two end pieces overlap: only the narrower channel's, of equal ones the later drawn, is left out.
      const channel = pieces.centrelineChannel[c];
      const otherChannel = pieces.centrelineChannel[other];
      const isLater = channel > otherChannel || (channel === otherChannel && c > other);
      if (isEqualSize(width, otherWidth) ? !isLater : width > otherWidth) return null;
    }
    return { position, why: 'overlap' };
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
  const middle = { x: 0, y: 0 };
  pointAt(draft, c, (from + position) / 2, middle);
  // Along the piece it is as long as the piece, but for 15°: what is further along it is not looked at.
  const total = pieces.centrelineLength[line];
  const rounds = pieces.centrelineClosed[line] === 1 ? [-total, 0, total] : [0];
  return rounds.some((shift) => {
    const low = Math.max(0, joinAt + shift - 2 * span - draft.slackMm);
    const high = joinAt + shift + 2 * span + draft.slackMm;
    for (
      let i = pieceAt(pieces, line, low);
      i < pieces.firstPiece[line + 1] && pieces.start[i] <= high;
      i++
    ) {
      const [x1, y1, x2, y2] = [pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]];
      if (distanceToSegment(middle.x, middle.y, x1, y1, x2, y2) <= span / 4 + draft.slackMm) return true;
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
function findTwinCut(draft: Draft, stops: Stops, end: number, twin: number): Cut | null {
  const { pieces, ends } = draft;
  const [c, other] = [end >> 1, twin >> 1];
  const own = pieces.half[endPiece(pieces, end)];
  const its = pieces.half[endPiece(pieces, twin)];
  if (isEqualSize(own, its) ? c < other : own > its) return null;
  const drawn = drawnPosition(draft, end);
  for (let k = stops.firstStop[c]; k < stops.firstStop[c + 1]; k++) {
    const isAtTip = Math.abs(stops.from[k] - drawn) >= ends.extension[end] - ROUNDING_MM;
    if (!isAtTip && Math.abs(stops.from[k] - drawn) <= draft.slackMm) {
      return { position: stops.from[k], why: 'overlap' };
    }
  }
  return null;
}

/** The end of its centreline that a stop stands at, −1 when it is inner. */
function endAt(draft: Draft, stops: Stops, stop: number): number {
  const c = stops.centreline[stop];
  if (draft.pieces.centrelineClosed[c] === 1) return -1;
  if (Math.abs(stops.from[stop] - endPosition(draft, 2 * c)) <= draft.slackMm) return 2 * c;
  if (Math.abs(stops.to[stop] - endPosition(draft, 2 * c + 1)) <= draft.slackMm) return 2 * c + 1;
  return -1;
}

/**
 * Whether a centreline between two positions stays within `within` of the others' and within 15° of them; what
 * its own end and one of theirs were carried on by counts with it.
 */
function runsAlong(
  draft: Draft,
  c: number,
  s1: number,
  s2: number,
  isOther: (line: number) => boolean,
  carriedEnd: number,
  within: number,
): boolean {
  const { pieces, slackMm } = draft;
  const low = Math.min(s1, s2);
  const high = Math.max(s1, s2);
  const length = pieces.centrelineLength[c];
  let runs = 0;
  const isBeside = (a: number, b: number, stretch: Stretch): boolean => {
    if (b - a <= slackMm) return true;
    runs += b - a;
    return [a, (a + b) / 2, b].every((s) => isAlong(draft, c, s, stretch, isOther, carriedEnd, within));
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
  const found: number[] = [];
  for (let k = near.firstPair[i]; k < near.firstPair[i + 1]; k++) {
    const pair = near.pairOf[k];
    found.push(near.pairA[pair] === i ? near.pairB[pair] : near.pairA[pair]);
  }
  return {
    ux: (pieces.x2[i] - pieces.x1[i]) / pieces.length[i],
    uy: (pieces.y2[i] - pieces.y1[i]) / pieces.length[i],
    near: found,
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

function isAlong(
  draft: Draft,
  c: number,
  s: number,
  stretch: Stretch,
  isOther: (line: number) => boolean,
  carriedEnd: number,
  within: number,
): boolean {
  const { pieces } = draft;
  const at = { x: 0, y: 0 };
  pointAt(draft, c, s, at);
  const others = stretch.near.filter((j) => pieces.centreline[j] !== c && isOther(pieces.centreline[j]));
  const distanceTo = (j: number): number =>
    distanceToSegment(at.x, at.y, pieces.x1[j], pieces.y1[j], pieces.x2[j], pieces.y2[j]);
  const best = others.reduce((least, j) => Math.min(least, distanceTo(j)), Number.POSITIVE_INFINITY);
  // At a corner of the other both its legs are as near, to within rounding: one that runs along is enough.
  const isAlong = (j: number): boolean => {
    const vx = pieces.x2[j] - pieces.x1[j];
    const vy = pieces.y2[j] - pieces.y1[j];
    return Math.abs((stretch.ux * vy - stretch.uy * vx) / pieces.length[j]) <= MOST_SINE;
  };
  const isNear = (j: number): boolean => distanceTo(j) <= best + draft.slackMm && isAlong(j);
  if (best <= within + draft.slackMm && others.some(isNear)) return true;
  return runsAlongExtension(draft, stretch, at, carriedEnd, within);
}

/** The same beside what an end was carried on by. */
function runsAlongExtension(
  { ends, slackMm }: Draft,
  { ux, uy }: Stretch,
  at: { readonly x: number; readonly y: number },
  end: number,
  within: number,
): boolean {
  if (end < 0 || ends.extension[end] <= slackMm) return false;
  const vx = ends.tipX[end] - ends.x[end];
  const vy = ends.tipY[end] - ends.y[end];
  const sine = Math.abs((ux * vy - uy * vx) / ends.extension[end]);
  const distance = distanceToSegment(at.x, at.y, ends.x[end], ends.y[end], ends.tipX[end], ends.tipY[end]);
  return distance <= within + slackMm && sine <= MOST_SINE;
}
