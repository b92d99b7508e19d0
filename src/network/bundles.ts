import { remembered } from '../by-key.ts';
import type { Nearness } from '../geometry/near.ts';
import type { Pieces } from '../geometry/pieces.ts';
import { type Groups, itemsOf, toGroups } from '../groups.ts';
import { type CentrelineEnds, END_FREE, NodeUnion } from './draft.ts';

/**
 * Rule 3, bundles: ends of one plane within the slack of each other, chains too. Columns over the ends (2c the start of
 * centreline c, 2c + 1 its last point).
 */
export interface Bundles {
  /** The first end of the bundle that the end belongs to; −1 where it is alone. */
  readonly of: Int32Array;
  /**
   * The same over strokes shorter than the slack: such a stroke keeps its two ends apart (rule 2: no chain of places goes
   * through it), so that a curve drawn as many of them keeps its length; but none of the strokes that end there is joined
   * over another way than end to end.
   */
  readonly around: Int32Array;
  /** The ends of each bundle, by its first end; none for any other end. */
  readonly members: Groups;
}

/**
 * Finds the bundles among ends that no port has taken. Cost: linear in the near pairs; where strokes shorter than the slack
 * end, each pair of ends there is held against those strokes.
 */
export function findBundles(near: Nearness, ends: CentrelineEnds, slackMm: number): Bundles {
  const links = linksOf(near, ends, slackMm);
  const around = unite(ends.x.length, links);
  const short = shortStrokesAt(near.pieces, links, slackMm);
  const of =
    short.size === 0
      ? around
      : unite(
          ends.x.length,
          links.filter(([a, b]) => !isAcrossShortStroke(ends, short, a, b, slackMm)),
        );
  return { of, around, members: toGroups(of.length, of) };
}

/** The ends of the bundle that an end belongs to; none for an end that is alone. */
export function bundleAt({ of, members }: Bundles, end: number): Int32Array {
  return of[end] < 0 ? NOBODY : itemsOf(members, of[end]);
}

const NOBODY = new Int32Array(0);

type Link = readonly [number, number];

/** Pairs of free ends within the slack of each other. */
function linksOf(
  { pieces, pairA, pairB, pairCount, pairDistance }: Nearness,
  ends: CentrelineEnds,
  slackMm: number,
): Link[] {
  const links: Link[] = [];
  const { x, y, state } = ends;
  for (let k = 0; k < pairCount; k++) {
    if (pairDistance[k] > slackMm) continue;
    const aFrom = firstEnd(pieces, pairA[k]);
    const aTo = lastEnd(pieces, pairA[k]);
    if (aFrom > aTo) continue;
    const bFrom = firstEnd(pieces, pairB[k]);
    const bTo = lastEnd(pieces, pairB[k]);
    for (let a = aFrom; a <= aTo; a++) {
      for (let b = bFrom; b <= bTo; b++) {
        const dx = x[a] - x[b];
        const dy = y[a] - y[b];
        // Nearly all are far apart: that is seen without a root.
        if (dx > slackMm || dx < -slackMm || dy > slackMm || dy < -slackMm) continue;
        const isLink = state[a] === END_FREE && state[b] === END_FREE && Math.hypot(dx, dy) <= slackMm;
        if (isLink) links.push([a, b]);
      }
    }
  }
  return links;
}

/** The ends that a piece has are those from firstEnd to lastEnd, none when the first is beyond the last. */
function firstEnd(pieces: Pieces, piece: number): number {
  const c = pieces.centreline[piece];
  return piece === pieces.firstPiece[c] && pieces.centrelineClosed[c] === 0 ? 2 * c : 2 * c + 1;
}

function lastEnd(pieces: Pieces, piece: number): number {
  const c = pieces.centreline[piece];
  return piece === pieces.firstPiece[c + 1] - 1 && pieces.centrelineClosed[c] === 0 ? 2 * c + 1 : 2 * c;
}

/** The smallest end of each set that the links make; −1 for an end without a link. */
function unite(count: number, links: readonly Link[]): Int32Array {
  const sets = new NodeUnion(count);
  for (const [a, b] of links) sets.unite(a, b);
  const of = new Int32Array(count).fill(-1);
  for (const [a, b] of links) of[a] = of[b] = sets.find(a);
  return of;
}

/** For each end, the ends linked with it (and itself) that belong to strokes shorter than the slack. */
function shortStrokesAt(pieces: Pieces, links: readonly Link[], slackMm: number): Map<number, number[]> {
  const short = new Map<number, number[]>();
  const add = (end: number, other: number): void => {
    if (pieces.centrelineLength[other >> 1] > slackMm) return;
    const list = remembered(short, end, () => []);
    if (list.length < MOST_SHORT_STROKES && !list.includes(other)) list.push(other);
  };
  for (const [a, b] of links) {
    add(a, a);
    add(a, b);
    add(b, b);
    add(b, a);
  }
  return short;
}

/** More strokes shorter than the slack than this at one place are no drawing; bounds the time. */
const MOST_SHORT_STROKES = 64;

/** Whether a stroke shorter than the slack leads from one end to the other: it joins them, not the slack. */
function isAcrossShortStroke(
  ends: CentrelineEnds,
  short: ReadonlyMap<number, readonly number[]>,
  a: number,
  b: number,
  slackMm: number,
): boolean {
  return (short.get(a) ?? []).some((near) => {
    const far = near ^ 1;
    const reaches = Math.hypot(ends.x[far] - ends.x[b], ends.y[far] - ends.y[b]) <= slackMm;
    return reaches && sideOf(ends, near >> 1, a) !== sideOf(ends, near >> 1, b);
  });
}

function sideOf(ends: CentrelineEnds, c: number, end: number): 0 | 1 {
  const toStart = Math.hypot(ends.x[end] - ends.x[2 * c], ends.y[end] - ends.y[2 * c]);
  const toEnd = Math.hypot(ends.x[end] - ends.x[2 * c + 1], ends.y[end] - ends.y[2 * c + 1]);
  return toStart <= toEnd ? 0 : 1;
}
