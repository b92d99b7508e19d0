import type { Line } from './closest.ts';

/** A stretch of one centreline that faces a stretch of another (or of its own). Positions in mm along each. */
export interface Facing {
  readonly a: number;
  readonly b: number;
  readonly from: number;
  readonly to: number;
  /** Positions on b that face `from` and `to`. */
  readonly otherFrom: number;
  readonly otherTo: number;
}

/** A place where two centrelines, or two stretches of one, leave little or nothing between them. */
export interface Wall {
  /** Pieces at the thinnest place. */
  readonly pieceA: number;
  readonly pieceB: number;
  readonly centrelineA: number;
  readonly centrelineB: number;
  /** Extent on centreline A and on B, mm. */
  readonly fromA: number;
  readonly toA: number;
  readonly fromB: number;
  readonly toB: number;
  /** Length of thin wall or overlap along A, mm. */
  readonly lengthMm: number;
  /** Thinnest material; 0 or less where the painted areas touch or overlap. */
  readonly gapMm: number;
  /** From wall to wall at the thinnest place. */
  readonly mark: Line;
}

/** The centrelines of a group of stretches, and its extent on them. */
export function extentOf(
  group: readonly Facing[],
): Pick<Wall, 'centrelineA' | 'centrelineB' | 'fromA' | 'toA' | 'fromB' | 'toB'> {
  const [{ a, b, from: fromA }] = group;
  const [, toA] = rangeOf(group.map(({ to }) => to));
  const [fromB, toB] = rangeOf(group.flatMap(({ otherFrom, otherTo }) => [otherFrom, otherTo]));
  return { centrelineA: a, centrelineB: b, fromA, toA, fromB, toB };
}

/** Least and most of some numbers; Infinity and −Infinity of none. */
export function rangeOf(values: Iterable<number>): readonly [least: number, most: number] {
  let least = Number.POSITIVE_INFINITY;
  let most = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    least = Math.min(least, value);
    most = Math.max(most, value);
  }
  return [least, most];
}

/**
 * Gathers stretches of the same two centrelines that follow each other along both, bridging no more than `bridgeMm` of
 * both together, into groups: each group is one place of the drawing. Cost: n log n.
 */
export function groupStretches<T extends Facing>(
  stretches: readonly T[],
  bridgeMm: (stretch: T) => number,
): T[][] {
  const sorted = [...stretches].sort((p, q) => p.a - q.a || p.b - q.b || p.from - q.from || p.to - q.to);
  const groups: T[][] = [];
  let open: Open<T>[] = [];
  for (let k = 0; k < sorted.length; k++) {
    const stretch = sorted[k];
    if (k > 0 && (sorted[k - 1].a !== stretch.a || sorted[k - 1].b !== stretch.b)) close(open.splice(0));
    const bridge = bridgeMm(stretch);
    const low = Math.min(stretch.otherFrom, stretch.otherTo);
    const high = Math.max(stretch.otherFrom, stretch.otherTo);
    const joined: Open<T> = { members: [stretch], to: stretch.to, low, high, bridge };
    const still: Open<T>[] = [];
    for (const group of open) {
      const reach = Math.max(group.bridge, bridge) * (1 + 1e-9);
      const along = Math.max(0, stretch.from - group.to);
      if (along > reach) close([group]);
      else if (along + Math.max(0, low - group.high, group.low - high) <= reach) {
        joined.members =
          group.members.length > joined.members.length
            ? pushAll(group.members, joined.members)
            : pushAll(joined.members, group.members);
        joined.to = Math.max(joined.to, group.to);
        joined.low = Math.min(joined.low, group.low);
        joined.high = Math.max(joined.high, group.high);
        joined.bridge = Math.max(joined.bridge, group.bridge);
      } else still.push(group);
    }
    still.push(joined);
    open = still;
  }
  close(open);
  return groups;

  function close(ready: readonly Open<T>[]): void {
    for (const { members } of ready) groups.push(members.sort((p, q) => p.from - q.from || p.to - q.to));
  }
}

/** Length that intervals cover together; the order does not matter. */
export function coveredLength(intervals: readonly (readonly [number, number])[]): number {
  const sorted = [...intervals].sort((p, q) => p[0] - q[0]);
  let covered = 0;
  let reach = Number.NEGATIVE_INFINITY;
  for (const [from, to] of sorted) {
    if (to <= reach) continue;
    covered += to - Math.max(from, reach);
    reach = to;
  }
  return covered;
}

interface Open<T> {
  members: T[];
  to: number;
  low: number;
  high: number;
  bridge: number;
}

function pushAll<T>(into: T[], from: readonly T[]): T[] {
  for (const item of from) into.push(item);
  return into;
}
