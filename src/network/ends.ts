import { distanceToSegment, nearestParameter } from '../geometry/segment.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { type Bundles, findBundles } from './bundles.ts';
import { type Draft, drawnPosition, END_FREE, END_JOINED, endPiece, endPosition } from './draft.ts';
import { reachInStrip, StripNeighbours } from './strips.ts';

/**
 * Rule 3: a channel end inside another channel's strip (or its own, more than two widths back along it) joins it. The
 * end is carried on in its own direction to that centreline if it meets it within that channel's width, else straight to
 * the nearest point of it; of several strips, the one whose centreline is nearest. An end whose channel has already met
 * that centreline since it entered the strip has joined it there, and rule 4 looks at the piece beyond.
 *
 * Ends within the slack of each other are one node (bundles.ts). The strips of its members are no candidates for each
 * other: each member is carried on alone from there, unless a member's drawn stroke already reaches that centreline inside
 * that strip. Nor is a strip that the duct itself goes on in within two widths, drawn as further strokes end to end.
 *
 * Each end is judged on the drawing alone, so the order of the ends does not matter.
 */
export function joinEnds(draft: Draft): Bundles {
  const bundles = findBundles(draft.near, draft.ends, draft.slackMm);
  const judge: EndJudge = {
    draft,
    bundles,
    met: meetingsByCentreline(draft),
    strips: new StripNeighbours(draft, (c) => draft.pieces.centrelineChannel[c]),
  };
  const free = freeEnds(draft);
  // All fates are settled on the drawing before any is written down.
  const goals = free.map((end) => goalOf(judge, end));
  markBundles(draft, bundles);
  free.forEach((end, k) => {
    const goal = goals[k];
    if (goal !== null) join(draft, end, goal);
  });
  return bundles;
}

interface EndJudge {
  readonly draft: Draft;
  readonly bundles: Bundles;
  readonly met: Meetings;
  readonly strips: StripNeighbours;
}

function freeEnds({ pieces, ends }: Draft): number[] {
  const free: number[] = [];
  for (let e = 0; e < 2 * pieces.centrelineCount; e++) {
    if (pieces.centrelineClosed[e >> 1] === 0 && ends.state[e] === END_FREE) free.push(e);
  }
  return free;
}

/** The members of a bundle are one node, wherever each is carried on to from there. */
function markBundles(draft: Draft, { of, first, member }: Bundles): void {
  const { ends, marks, nodes } = draft;
  for (let head = 0; head < of.length; head++) {
    if (of[head] !== head) continue;
    const node = nodes.add();
    for (let k = first[head]; k < first[head + 1]; k++) {
      const end = member[k];
      ends.state[end] = END_JOINED;
      marks.addMeeting(end >> 1, drawnPosition(draft, end), node);
    }
  }
}

/** An end this near is on the centreline; a carried-on piece as short as rounding would have no direction. */
const ROUNDING_MM = 1e-9;

interface Candidate {
  readonly centreline: number;
  /** The piece of it that is nearest to the end. */
  readonly piece: number;
  readonly distance: number;
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

/** Where an end goes: carried on to a centreline, or joined where its drawn stroke has met one. */
type Goal =
  | {
      readonly kind: 'carried on';
      readonly centreline: number;
      readonly x: number;
      readonly y: number;
      readonly s: number;
    }
  | { readonly kind: 'met'; readonly centreline: number };

/** What rule 3 says of one end; null when it stays as it is. Looks at the drawing alone. */
function goalOf(judge: EndJudge, end: number): Goal | null {
  const { draft } = judge;
  const candidate = candidatesOf(judge, end).find(({ centreline }) => !goesOnIn(judge, end, centreline));
  if (candidate === undefined) return null;
  const { centreline } = candidate;
  const last = metInStrip(judge, end, centreline);
  if (last !== null) {
    // Met to the last bit at the end itself: joined there. Met before: rule 4's, and no farther strip's.
    return Math.abs(endPosition(draft, end) - last) <= draft.slackMm ? { kind: 'met', centreline } : null;
  }
  if (bundleReaches(judge, end, centreline)) return null;
  return { kind: 'carried on', centreline, ...carryOn(draft, end, candidate) };
}

function join(draft: Draft, end: number, goal: Goal): void {
  const { ends, marks, nodes } = draft;
  ends.state[end] = END_JOINED;
  ends.joinedTo[end] = goal.centreline;
  if (goal.kind === 'met') return;
  const length = Math.hypot(goal.x - ends.x[end], goal.y - ends.y[end]);
  if (length > ROUNDING_MM) {
    ends.extension[end] = length;
    ends.tipX[end] = goal.x;
    ends.tipY[end] = goal.y;
  }
  const node = nodes.add();
  marks.addMeeting(end >> 1, endPosition(draft, end), node);
  marks.addMeeting(goal.centreline, goal.s, node);
}

/** Whether the drawn stroke of another member of the end's bundle already reaches a centreline inside its strip. */
function bundleReaches(judge: EndJudge, end: number, centreline: number): boolean {
  return membersAt(judge.bundles, end).some(
    (other) => other !== end && metInStrip(judge, other, centreline) !== null,
  );
}

/**
 * Whether strokes that join end to end lead from an end to an end of another centreline, or across it inside its strip,
 * within two of its widths: then that is where the duct itself goes on, and no strip that the end ran into. It is the same
 * duct as if it had been drawn in one stroke, which no end joins within two widths back along it.
 */
function goesOnIn(judge: EndJudge, end: number, centreline: number): boolean {
  const { draft, bundles } = judge;
  const { pieces } = draft;
  const mostMm = 4 * pieces.half[pieces.firstPiece[centreline]];
  const seen = new Set<number>([end]);
  const open: { readonly from: number; readonly walkedMm: number }[] = [{ from: end, walkedMm: 0 }];
  const enter = (at: number, walkedMm: number): void => {
    for (const from of membersAt(bundles, at)) {
      if (!seen.has(from)) open.push({ from, walkedMm });
      seen.add(from);
    }
  };
  enter(end, 0);
  for (let k = 0; k < open.length && k < MOST_STROKES; k++) {
    const { from, walkedMm } = open[k];
    const length = pieces.centrelineLength[from >> 1];
    if (walkedMm > 0 && metInStrip(judge, from, centreline) !== null) return true;
    if (walkedMm + length > mostMm) continue;
    if (membersAt(bundles, from ^ 1).some((e) => e >> 1 === centreline)) return true;
    seen.add(from ^ 1);
    enter(from ^ 1, walkedMm + length);
  }
  return false;
}

/** More strokes within two widths are no drawing; bounds the time. */
const MOST_STROKES = 256;

/** The ends of the bundle that an end belongs to; none for an end that is alone. */
function membersAt({ of, first, member }: Bundles, end: number): Int32Array {
  return of[end] < 0 ? member.subarray(0, 0) : member.subarray(first[of[end]], first[of[end] + 1]);
}

/**
 * Position at which the end's channel met a centreline since it entered that strip; null when it did not. Its other end,
 * if that lies on the centreline within the slack, has met it there (rule 2).
 */
function metInStrip({ draft, met, strips }: EndJudge, end: number, centreline: number): number | null {
  const last =
    lastMeeting(draft, end, centreline, met) ??
    (isOnCentreline(draft, end ^ 1, centreline) && !isOnCentreline(draft, end, centreline)
      ? drawnPosition(draft, end ^ 1)
      : null);
  return last !== null && hasStayedInside(draft, end, last, centreline, strips) ? last : null;
}

/** The strips that hold the end, but those of its own bundle, nearest centreline first. */
function candidatesOf({ draft, bundles }: EndJudge, end: number): Candidate[] {
  const { near, pieces, ends, slackMm } = draft;
  const own = endPiece(pieces, end);
  const nearest = new Map<number, Candidate>();
  for (let k = near.firstPair[own]; k < near.firstPair[own + 1]; k++) {
    const pair = near.pairOf[k];
    const other = near.pairA[pair] === own ? near.pairB[pair] : near.pairA[pair];
    if (!isInPieceStrip(pieces, other, ends.x[end], ends.y[end], slackMm, null)) continue;
    const c = pieces.centreline[other];
    if (isInBundle(bundles, end, c)) continue;
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
    if (distance < (nearest.get(c)?.distance ?? Number.POSITIVE_INFINITY)) {
      nearest.set(c, { centreline: c, piece: other, distance });
    }
  }
  return [...nearest.values()].sort((a, b) => a.distance - b.distance || a.centreline - b.centreline);
}

/** Whether another end of a centreline stands at the same place. */
function isInBundle({ around }: Bundles, end: number, centreline: number): boolean {
  if (around[end] < 0) return false;
  return [2 * centreline, 2 * centreline + 1].some((e) => e !== end && around[e] === around[end]);
}

/** Whether a drawn end lies within the slack of another centreline. */
function isOnCentreline({ near, pieces, ends, slackMm }: Draft, end: number, centreline: number): boolean {
  if (centreline === end >> 1) return false;
  const own = endPiece(pieces, end);
  for (let k = near.firstPair[own]; k < near.firstPair[own + 1]; k++) {
    const pair = near.pairOf[k];
    if (near.pairDistance[pair] > slackMm) continue;
    const i = near.pairA[pair] === own ? near.pairB[pair] : near.pairA[pair];
    if (pieces.centreline[i] !== centreline) continue;
    const [x1, y1, x2, y2] = [pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]];
    if (distanceToSegment(ends.x[end], ends.y[end], x1, y1, x2, y2) <= slackMm) return true;
  }
  return false;
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

/** An end on a centreline within the slack is carried on at most this many slacks. */
const FLAT = 4;

/** The place on the candidate's centreline that the end joins. */
function carryOn(draft: Draft, end: number, candidate: Candidate): { x: number; y: number; s: number } {
  const { pieces, ends, near, slackMm } = draft;
  const width = 2 * pieces.half[candidate.piece];
  const x = ends.x[end];
  const y = ends.y[end];
  const ox = ends.outX[end];
  const oy = ends.outY[end];
  // On the centreline within the slack it has met it there, however flat the angle: no place far ahead.
  const reach = candidate.distance <= slackMm ? FLAT * slackMm : width + slackMm;
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
    if (t < -slackMm || t > reach || s < -tolerance || s > 1 + tolerance) continue;
    const share = Math.min(1, Math.max(0, s));
    // A hit just past a vertex gives way to one on the piece that goes on from there.
    const rank = share === s ? t : t + slackMm;
    if (rank >= best) continue;
    best = rank;
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
