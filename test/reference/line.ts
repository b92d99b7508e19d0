import { cross, direction, distance, dot, minus, nearestShare, type Point, plus } from './points.ts';

/** A drawn centreline with the duct that it stands for: one subpath of a channel. Lengths in mm. */
export interface Line {
  readonly points: readonly Point[];
  readonly closed: boolean;
  readonly widthMm: number;
  readonly halfMm: number;
  readonly depthMm: number;
  readonly plane: number;
}

/** Positions s along a line count from its drawn start; a carried-on piece before it has s < 0. */
export interface Nearest {
  readonly s: number;
  readonly distance: number;
  readonly at: Point;
}

export function lengthOf(points: readonly Point[]): number {
  let sum = 0;
  for (let i = 1; i < points.length; i++) sum += distance(points[i - 1], points[i]);
  return sum;
}

/** Position of every point along the line. */
export function positions(points: readonly Point[]): number[] {
  const S = [0];
  for (let i = 1; i < points.length; i++) S.push(S[i - 1] + distance(points[i - 1], points[i]));
  return S;
}

export function nearestOn(x: Point, points: readonly Point[]): Nearest {
  let best: Nearest = { s: 0, distance: Number.POSITIVE_INFINITY, at: points[0] };
  let s = 0;
  for (let i = 1; i < points.length; i++) {
    const [p, q] = [points[i - 1], points[i]];
    const length = distance(p, q);
    const share = nearestShare(x, p, q);
    const at = plus(p, minus(q, p), share);
    if (distance(x, at) < best.distance) best = { s: s + share * length, distance: distance(x, at), at };
    s += length;
  }
  return best;
}

/** The points of the line from position s to position t, both within the line; reversed where t < s. */
export function stretch(points: readonly Point[], s: number, t: number): Point[] {
  if (t < s) return stretch(points, t, s).reverse();
  const S = positions(points);
  const inner = points.filter((_, i) => S[i] > s && S[i] < t);
  return [pointAt(points, s), ...inner, pointAt(points, t)];
}

export function pointAt(points: readonly Point[], s: number): Point {
  const S = positions(points);
  for (let i = 1; i < points.length; i++) {
    if (s <= S[i] || i === points.length - 1) {
      return plus(points[i - 1], direction(points[i - 1], points[i]), s - S[i - 1]);
    }
  }
  return points[0];
}

/** A convex piece of a strip: a rectangle round one straight piece, or the round wedge at an inner vertex. */
export type StripPiece =
  | {
      readonly kind: 'rectangle';
      readonly p: Point;
      readonly u: Point;
      readonly length: number;
      readonly half: number;
      /** Whether the strip ends square there, rather than going on. */
      readonly endsAtStart: boolean;
      readonly endsAtEnd: boolean;
    }
  | {
      readonly kind: 'wedge';
      readonly v: Point;
      readonly before: Point;
      readonly after: Point;
      readonly half: number;
    };

/** The strip of a centreline: round at its inner vertices, ended square. */
export function stripOf(points: readonly Point[], closed: boolean, half: number): StripPiece[] {
  const pieces: StripPiece[] = [];
  const last = points.length - 1;
  for (let i = 1; i <= last; i++) {
    pieces.push({
      kind: 'rectangle',
      p: points[i - 1],
      u: direction(points[i - 1], points[i]),
      length: distance(points[i - 1], points[i]),
      half,
      endsAtStart: i === 1 && !closed,
      endsAtEnd: i === last && !closed,
    });
  }
  for (let i = 1; i < last; i++) pieces.push(wedge(points[i - 1], points[i], points[i + 1], half));
  if (closed) pieces.push(wedge(points[last - 1], points[0], points[1], half));
  return pieces;
}

export function wedge(a: Point, v: Point, b: Point, half: number): StripPiece {
  return { kind: 'wedge', v, before: direction(a, v), after: direction(v, b), half };
}

/** The part of the segment from a to b, as lengths from a, that lies in the piece; null for none. */
export function within(
  piece: StripPiece,
  a: Point,
  b: Point,
  endSlack: number,
): readonly [number, number] | null {
  const length = distance(a, b);
  const d = direction(a, b);
  if (piece.kind === 'rectangle') {
    const { p, u, half } = piece;
    const away = minus(a, p);
    const along = slab(
      dot(away, u),
      dot(d, u),
      piece.endsAtStart ? -endSlack : 0,
      piece.length + (piece.endsAtEnd ? endSlack : 0),
    );
    const across = slab(cross(u, away), cross(u, d), -half, half);
    return common(common(along, across), [0, length]);
  }
  const { v, before, after, half } = piece;
  const away = minus(a, v);
  const beyond = slab(dot(away, before), dot(d, before), 0, Number.POSITIVE_INFINITY);
  const short = slab(dot(away, after), dot(d, after), Number.NEGATIVE_INFINITY, 0);
  return common(common(common(beyond, short), disc(a, d, v, half)), [0, length]);
}

/**
 * Where least ≤ x + t·by ≤ most. A line that runs along the border (to rounding) is inside: where it is parallel but for the
 * rounding of its direction, the place where it crosses the border is rounding too.
 */
function slab(x: number, by: number, least: number, most: number): readonly [number, number] | null {
  const margin = Math.abs(by) < 1e-8 ? 1e-9 : 0;
  if (Math.abs(by) < 1e-12) {
    return x >= least - margin && x <= most + margin
      ? [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY]
      : null;
  }
  const [t, u] = [(least - margin - x) / by, (most + margin - x) / by];
  return by > 0 ? [t, u] : [u, t];
}

/** Where the ray from a in unit direction d is inside the disc. */
export function disc(a: Point, d: Point, centre: Point, radius: number): readonly [number, number] | null {
  const away = minus(centre, a);
  const middle = dot(away, d);
  const miss = cross(d, away);
  if (Math.abs(miss) > radius) return null;
  const half = Math.sqrt(radius * radius - miss * miss);
  return [middle - half, middle + half];
}

function common(
  a: readonly [number, number] | null,
  b: readonly [number, number] | null,
): readonly [number, number] | null {
  if (a === null || b === null) return null;
  const both = [Math.max(a[0], b[0]), Math.min(a[1], b[1])] as const;
  return both[0] <= both[1] ? both : null;
}

/** Whether the point is in the strip, grown by the slack. */
export function isInStrip(x: Point, line: Line, slack: number): boolean {
  const { points, closed, halfMm } = line;
  const last = points.length - 1;
  for (let i = 1; i <= last; i++) {
    const u = direction(points[i - 1], points[i]);
    const along = dot(minus(x, points[i - 1]), u);
    const across = Math.abs(cross(u, minus(x, points[i - 1])));
    if (along >= -slack && along <= distance(points[i - 1], points[i]) + slack && across <= halfMm + slack) {
      return true;
    }
  }
  const vertices = closed ? points : points.slice(1, last);
  return vertices.some((v) => distance(v, x) <= halfMm + slack);
}

/**
 * How far a path stays in strips from its start on, to the exact wall: the end of the first run of pieces inside. The
 * slack decides whether the start is inside and whether neighbouring pieces are one; a path that runs along a square end
 * within the slack is inside.
 */
export function firstLeaves(path: readonly Point[], strips: readonly StripPiece[], slack: number): number {
  const exact = runFromStart(path, strips, 0, slack);
  const half = 0.99 * Math.min(...strips.map((piece) => piece.half));
  if (exact >= half) return exact;
  const alongEnd = runFromStart(path, strips, slack, slack);
  return alongEnd >= half ? alongEnd : exact > 2 * slack ? exact : 0;
}

function runFromStart(
  path: readonly Point[],
  strips: readonly StripPiece[],
  endSlack: number,
  slack: number,
): number {
  let reached = 0;
  let s = 0;
  for (let i = 1; i < path.length; i++) {
    const [a, b] = [path[i - 1], path[i]];
    const length = distance(a, b);
    if (length === 0) continue;
    const runs = strips
      .flatMap((piece) => {
        const run = within(piece, a, b, endSlack);
        return run === null ? [] : [[s + run[0], s + run[1]] as const];
      })
      .sort((x, y) => x[0] - y[0]);
    for (const [from, to] of runs) {
      if (from > reached + 2 * slack) break;
      reached = Math.max(reached, to);
    }
    s += length;
    if (reached < s - 2 * slack) return reached;
  }
  return reached;
}

/** Where segments ab and cd cross, as shares of each; null where they don't, or are parallel. */
export function crossing(
  a: Point,
  b: Point,
  c: Point,
  d: Point,
): { readonly t: number; readonly u: number } | null {
  const r = minus(b, a);
  const q = minus(d, c);
  const area = cross(r, q);
  if (Math.abs(area) < 1e-12 * Math.hypot(r.x, r.y) * Math.hypot(q.x, q.y)) return null;
  const t = cross(minus(c, a), q) / area;
  const u = cross(minus(c, a), r) / area;
  return t >= 0 && t <= 1 && u >= 0 && u <= 1 ? { t, u } : null;
}
