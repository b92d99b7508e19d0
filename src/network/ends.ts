import { nearestParameter } from '../geometry/segment.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { type Draft, END_FREE, END_JOINED, endPiece, endPosition } from './draft.ts';
import { reachInStrip, StripNeighbours } from './strips.ts';

/**
 * Rule 3: a channel end inside another channel's strip (or its own, more than two widths back along it) joins it. The
 * end is carried on in its own direction to that centreline if it meets it within that channel's width, else straight to
 * the nearest point of it; of several strips, the one whose centreline is nearest. An end whose channel has already met
 * that centreline since it entered the strip has joined it there, and rule 4 looks at the piece beyond.
 *
 * Each end is judged on the drawing alone, so the order of the ends does not matter.
 */
export function joinEnds(draft: Draft): void {
  const met = meetingsByCentreline(draft);
  const strips = new StripNeighbours(draft, (c) => draft.pieces.centrelineChannel[c]);
  for (let c = 0; c < draft.pieces.centrelineCount; c++) {
    if (draft.pieces.centrelineClosed[c] === 1) continue;
    joinEnd(draft, 2 * c, met, strips);
    joinEnd(draft, 2 * c + 1, met, strips);
  }
}

/** An end this near is on the centreline; a carried-on piece as short as rounding would have no direction. */
const ROUNDING_MM = 1e-9;

interface Candidate {
  readonly centreline: number;
  piece: number;
  distance: number;
}

/** For each centreline, the indices of the marks on it that are meetings; and each meeting's partner. */
interface Meetings {
  readonly first: Int32Array;
  readonly mark: Int32Array;
}

function meetingsByCentreline(draft: Draft): Meetings {
  const { marks, pieces } = draft;
  const first = new Int32Array(pieces.centrelineCount + 1);
  for (let m = 0; m < marks.node.length; m++) if (marks.port[m] < 0) first[marks.centreline[m] + 1]++;
  for (let c = 0; c < pieces.centrelineCount; c++) first[c + 1] += first[c];
  const fill = first.slice();
  const mark = new Int32Array(first[pieces.centrelineCount]);
  for (let m = 0; m < marks.node.length; m++) if (marks.port[m] < 0) mark[fill[marks.centreline[m]]++] = m;
  return { first, mark };
}

function joinEnd(draft: Draft, end: number, met: Meetings, strips: StripNeighbours): void {
  const { ends, marks, nodes } = draft;
  if (ends.state[end] !== END_FREE) return;
  const c = end >> 1;
  for (const candidate of candidatesOf(draft, end)) {
    const last = lastMeeting(draft, end, candidate.centreline, met);
    if (last !== null && hasStayedInside(draft, end, last, candidate.centreline, strips)) {
      // Met to the last bit at the end itself: joined there. Met before: rule 4's, and no farther strip's.
      if (Math.abs(endPosition(draft, end) - last) <= draft.slackMm) {
        ends.state[end] = END_JOINED;
        ends.joinedTo[end] = candidate.centreline;
      }
      return;
    }
    const place = carryOn(draft, end, candidate);
    ends.state[end] = END_JOINED;
    ends.joinedTo[end] = candidate.centreline;
    const length = Math.hypot(place.x - ends.x[end], place.y - ends.y[end]);
    if (length > ROUNDING_MM) {
      ends.extension[end] = length;
      ends.tipX[end] = place.x;
      ends.tipY[end] = place.y;
    }
    const node = nodes.add();
    marks.addMeeting(c, endPosition(draft, end), node);
    marks.addMeeting(candidate.centreline, place.s, node);
    return;
  }
}

/** Strips that hold the end, nearest centreline first. */
function candidatesOf(draft: Draft, end: number): Candidate[] {
  const { near, pieces, ends, slackMm } = draft;
  const own = endPiece(pieces, end);
  const found: Candidate[] = [];
  for (let k = near.firstPair[own]; k < near.firstPair[own + 1]; k++) {
    const pair = near.pairOf[k];
    const other = near.pairA[pair] === own ? near.pairB[pair] : near.pairA[pair];
    if (!isInPieceStrip(pieces, other, ends.x[end], ends.y[end], slackMm, null)) continue;
    const c = pieces.centreline[other];
    const t = nearestParameter(
      ends.x[end],
      ends.y[end],
      pieces.x1[other],
      pieces.y1[other],
      pieces.x2[other],
      pieces.y2[other],
    );
    if (c === end >> 1) {
      const along = Math.abs(pieces.start[other] + t * pieces.length[other] - endPosition(draft, end));
      if (along <= 4 * pieces.half[own]) continue;
    }
    const distance = Math.hypot(
      ends.x[end] - (pieces.x1[other] + t * (pieces.x2[other] - pieces.x1[other])),
      ends.y[end] - (pieces.y1[other] + t * (pieces.y2[other] - pieces.y1[other])),
    );
    const known = found.find((candidate) => candidate.centreline === c);
    if (known === undefined) found.push({ centreline: c, piece: other, distance });
    else if (distance < known.distance) {
      known.piece = other;
      known.distance = distance;
    }
  }
  return found.sort((a, b) => a.distance - b.distance || a.centreline - b.centreline);
}

/** Position on the end's centreline of its meeting with another centreline nearest to the end; null when they never met. */
function lastMeeting(draft: Draft, end: number, other: number, met: Meetings): number | null {
  const { marks } = draft;
  const c = end >> 1;
  const position = endPosition(draft, end);
  let best: number | null = null;
  for (let k = met.first[c]; k < met.first[c + 1]; k++) {
    const mark = met.mark[k];
    // Both marks of one meeting are added one after the other.
    const partner = marks.node[mark ^ 1] === marks.node[mark] ? mark ^ 1 : -1;
    if (partner < 0 || marks.centreline[partner] !== other) continue;
    if (best === null || Math.abs(marks.from[mark] - position) < Math.abs(best - position))
      best = marks.from[mark];
  }
  return best;
}

function hasStayedInside(
  draft: Draft,
  end: number,
  from: number,
  other: number,
  strips: StripNeighbours,
): boolean {
  const length = Math.abs(endPosition(draft, end) - from);
  if (length <= draft.slackMm) return true;
  const direction = (end & 1) === 0 ? -1 : 1;
  const channel = draft.pieces.centrelineChannel[other];
  return reachInStrip(draft, end >> 1, from, direction, strips, channel, null) >= length - draft.slackMm;
}

/** The place on the candidate's centreline that the end joins. */
function carryOn(draft: Draft, end: number, candidate: Candidate): { x: number; y: number; s: number } {
  const { pieces, ends, near, slackMm } = draft;
  const width = 2 * pieces.half[candidate.piece];
  const x = ends.x[end];
  const y = ends.y[end];
  const ox = ends.outX[end];
  const oy = ends.outY[end];
  const reach = width + slackMm;
  let best = Number.POSITIVE_INFINITY;
  let place: { x: number; y: number; s: number } | null = null;
  const found = near.index?.search(
    Math.min(x, x + ox * reach),
    Math.min(y, y + oy * reach),
    Math.max(x, x + ox * reach),
    Math.max(y, y + oy * reach),
    (i) => pieces.centreline[i] === candidate.centreline,
  );
  for (const i of found ?? []) {
    if (candidate.centreline === end >> 1 && i === endPiece(pieces, end)) continue;
    const vx = pieces.x2[i] - pieces.x1[i];
    const vy = pieces.y2[i] - pieces.y1[i];
    const cross = ox * vy - oy * vx;
    if (Math.abs(cross) <= 1e-12 * pieces.length[i]) continue;
    const wx = pieces.x1[i] - x;
    const wy = pieces.y1[i] - y;
    const t = (wx * vy - wy * vx) / cross;
    const s = (wx * oy - wy * ox) / cross;
    const tolerance = slackMm / pieces.length[i];
    if (t < -slackMm || t > reach || s < -tolerance || s > 1 + tolerance || t >= best) continue;
    best = t;
    const share = Math.min(1, Math.max(0, s));
    place = {
      x: pieces.x1[i] + share * vx,
      y: pieces.y1[i] + share * vy,
      s: pieces.start[i] + share * pieces.length[i],
    };
  }
  if (place !== null) return place;
  const i = candidate.piece;
  const t = nearestParameter(x, y, pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]);
  return {
    x: pieces.x1[i] + t * (pieces.x2[i] - pieces.x1[i]),
    y: pieces.y1[i] + t * (pieces.y2[i] - pieces.y1[i]),
    s: pieces.start[i] + t * pieces.length[i],
  };
}
