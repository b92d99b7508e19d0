/**
 * Questions about closed rings, answered by one index over their edges: near constant time each for any drawing
 * that is not one long comb. Even-odd, so a ring inside a ring is a hole.
 */
import { orient2d } from 'robust-predicates';
import { indexBoxes } from '../geometry/box-index.ts';
import { distanceToSegment } from '../geometry/segment.ts';

export interface RingIndex {
  /** Inside by the even-odd rule; a point on an edge may count either way. */
  readonly contains: (x: number, y: number) => boolean;
  /** Groups (as given to `indexRings`) whose rings hold the point inside, each by the even-odd rule. */
  readonly groupsRound: (x: number, y: number) => readonly number[];
  /** Groups with an edge nearer than `distance`. */
  readonly groupsWithin: (x: number, y: number, distance: number) => readonly number[];
  /** Groups with an edge that meets the line from 1 to 2. */
  readonly groupsCrossed: (x1: number, y1: number, x2: number, y2: number) => readonly number[];
  /** Whether any edge meets the line from 1 to 2. */
  readonly crosses: (x1: number, y1: number, x2: number, y2: number) => boolean;
}

/** @param groups rings of each group, x0 y0 x1 y1 …; a ring that does not repeat its first point is closed here */
export function indexRings(groups: readonly (readonly Float64Array[])[]): RingIndex {
  const edges: number[] = [];
  const boxes: number[] = [];
  const groupOf: number[] = [];
  for (const [group, rings] of groups.entries()) {
    for (const ring of rings) {
      const n = ring.length / 2;
      for (let i = 0; i < n; i++) {
        const j = (i + 1) % n;
        const [x1, y1, x2, y2] = [ring[2 * i], ring[2 * i + 1], ring[2 * j], ring[2 * j + 1]];
        if (x1 === x2 && y1 === y2) continue;
        edges.push(x1, y1, x2, y2);
        boxes.push(Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2));
        groupOf.push(group);
      }
    }
  }
  const index = indexBoxes(boxes);
  const edgesIn = (x1: number, y1: number, x2: number, y2: number): readonly number[] =>
    index.search(Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2));
  /** Groups of those edges of a list for which the test says so. */
  const groupsOf = (found: readonly number[], test: (...edge: Edge) => boolean): readonly number[] => {
    const groups = new Set<number>();
    for (const e of found) if (!groups.has(groupOf[e]) && test(...edgeOf(edges, e))) groups.add(groupOf[e]);
    return [...groups];
  };

  const oddGroups = (x: number, y: number): Set<number> => {
    const odd = new Set<number>();
    if (x > index.maxX) return odd;
    for (const e of index.search(x, y, index.maxX, y)) {
      if (rayMeets(x, y, ...edgeOf(edges, e)) && !odd.delete(groupOf[e])) odd.add(groupOf[e]);
    }
    return odd;
  };
  return {
    contains: (x, y) => oddGroups(x, y).size % 2 === 1,
    groupsRound: (x, y) => [...oddGroups(x, y)],
    groupsWithin: (x, y, distance) =>
      groupsOf(
        index.search(x - distance, y - distance, x + distance, y + distance),
        (...edge) => distanceToSegment(x, y, ...edge) <= distance,
      ),
    groupsCrossed: (x1, y1, x2, y2) =>
      groupsOf(edgesIn(x1, y1, x2, y2), (...edge) => segmentsMeet(x1, y1, x2, y2, ...edge)),
    crosses: (x1, y1, x2, y2) =>
      edgesIn(x1, y1, x2, y2).some((e) => segmentsMeet(x1, y1, x2, y2, ...edgeOf(edges, e))),
  };
}

/** The points, with the first one repeated at the end where it is not yet. */
export function closedRing(points: Float64Array): Float64Array {
  const n = points.length;
  if (points[0] === points[n - 2] && points[1] === points[n - 1]) return points;
  const ring = new Float64Array(n + 2);
  ring.set(points);
  ring.set([points[0], points[1]], n);
  return ring;
}

/** A ring of so many corners on a circle, the first one repeated. */
export function circleRing(x: number, y: number, radius: number, corners = 128): Float64Array {
  const ring = new Float64Array(2 * corners + 2);
  for (let i = 0; i <= corners; i++) {
    const angle = (2 * Math.PI * (i % corners)) / corners;
    ring[2 * i] = x + radius * Math.cos(angle);
    ring[2 * i + 1] = y + radius * Math.sin(angle);
  }
  return ring;
}

/** Rings that lie in no other of the set. */
export function outerRings(rings: readonly Float64Array[]): readonly Float64Array[] {
  if (rings.length < 2) return rings;
  const index = indexRings(rings.map((ring) => [ring]));
  return rings.filter((ring, i) => index.groupsRound(ring[0], ring[1]).every((other) => other === i));
}

type Edge = readonly [x1: number, y1: number, x2: number, y2: number];

function edgeOf(edges: readonly number[], e: number): Edge {
  return [edges[4 * e], edges[4 * e + 1], edges[4 * e + 2], edges[4 * e + 3]];
}

/** Whether the ray from (x, y) towards +x meets the edge; the lower end belongs to it, the upper does not. */
function rayMeets(x: number, y: number, x1: number, y1: number, x2: number, y2: number): boolean {
  if (y1 > y === y2 > y) return false;
  const side = orient2d(x1, y1, x2, y2, x, y);
  return y2 > y1 ? side < 0 : side > 0;
}

function segmentsMeet(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cx: number,
  cy: number,
  dx: number,
  dy: number,
): boolean {
  const c = orient2d(ax, ay, bx, by, cx, cy);
  const d = orient2d(ax, ay, bx, by, dx, dy);
  if (c > 0 === d > 0 && c !== 0 && d !== 0) return false;
  const a = orient2d(cx, cy, dx, dy, ax, ay);
  const b = orient2d(cx, cy, dx, dy, bx, by);
  // All on one line: their boxes overlap, for the index has found the pair.
  return !(a > 0 === b > 0 && a !== 0 && b !== 0);
}
