import type { PlaceOn } from '../geometry/on-piece.ts';
import { itemsOf } from '../groups.ts';
import { type Bundles, bundleAt, findBundles } from './bundles.ts';
import { candidatesOf, carryOn } from './carry-on.ts';
import { type Draft, drawnPosition, END_FREE, END_JOINED, endPosition, ROUNDING_MM } from './draft.ts';
import { StripMeetings } from './met-in-strip.ts';

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
  const judge: EndJudge = { draft, bundles, meetings: new StripMeetings(draft) };
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

/** What the fate of an end is judged by: the drawing alone. */
interface EndJudge {
  readonly draft: Draft;
  readonly bundles: Bundles;
  readonly meetings: StripMeetings;
}

function freeEnds({ pieces, ends }: Draft): number[] {
  const free: number[] = [];
  for (let e = 0; e < 2 * pieces.centrelineCount; e++) {
    if (pieces.centrelineClosed[e >> 1] === 0 && ends.state[e] === END_FREE) free.push(e);
  }
  return free;
}

/** The members of a bundle are one node, wherever each is carried on to from there. */
function markBundles(draft: Draft, { of, members }: Bundles): void {
  const { ends, marks, nodes } = draft;
  for (let head = 0; head < of.length; head++) {
    if (of[head] !== head) continue;
    const node = nodes.add();
    for (const end of itemsOf(members, head)) {
      ends.state[end] = END_JOINED;
      marks.addMeeting(end >> 1, drawnPosition(draft, end), node);
    }
  }
}

/** Where an end goes: carried on to a centreline, or joined where its drawn stroke has met one. */
type Goal =
  | ({ readonly kind: 'carried on'; readonly centreline: number } & PlaceOn)
  | { readonly kind: 'met'; readonly centreline: number };

/** What rule 3 says of one end; null when it stays as it is. Looks at the drawing alone. */
function goalOf(judge: EndJudge, end: number): Goal | null {
  const { draft, bundles, meetings } = judge;
  const candidate = candidatesOf(draft, bundles, end).find(
    ({ centreline }) => !goesOnIn(judge, end, centreline),
  );
  if (candidate === undefined) return null;
  const { centreline } = candidate;
  const last = meetings.placeOf(end, centreline);
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
function bundleReaches({ bundles, meetings }: EndJudge, end: number, centreline: number): boolean {
  return bundleAt(bundles, end).some(
    (other) => other !== end && meetings.placeOf(other, centreline) !== null,
  );
}

/**
 * Whether strokes that join end to end lead from an end to an end of another centreline, or across it inside its strip,
 * within two of its widths: then that is where the duct itself goes on, and no strip that the end ran into. It is the same
 * duct as if it had been drawn in one stroke, which no end joins within two widths back along it.
 */
function goesOnIn({ draft, bundles, meetings }: EndJudge, end: number, centreline: number): boolean {
  const { pieces } = draft;
  const mostMm = 4 * pieces.half[pieces.firstPiece[centreline]];
  const seen = new Set<number>([end]);
  const open: { readonly from: number; readonly walkedMm: number }[] = [{ from: end, walkedMm: 0 }];
  const enter = (at: number, walkedMm: number): void => {
    for (const from of bundleAt(bundles, at)) {
      if (!seen.has(from)) open.push({ from, walkedMm });
      seen.add(from);
    }
  };
  enter(end, 0);
  for (let k = 0; k < open.length && k < MOST_STROKES; k++) {
    const { from, walkedMm } = open[k];
    const length = pieces.centrelineLength[from >> 1];
    if (walkedMm > 0 && meetings.placeOf(from, centreline) !== null) return true;
    if (walkedMm + length > mostMm) continue;
    if (bundleAt(bundles, from ^ 1).some((e) => e >> 1 === centreline)) return true;
    seen.add(from ^ 1);
    enter(from ^ 1, walkedMm + length);
  }
  return false;
}

/** More strokes within two widths are no drawing; bounds the time. */
const MOST_STROKES = 256;
