import { nearestParameter } from '../geometry/segment.ts';

/** Two points, one on each of two shapes, and how far they lie apart (mm). */
export interface Closest {
  readonly distanceMm: number;
  readonly x1: number;
  readonly y1: number;
  readonly x2: number;
  readonly y2: number;
}

/** A straight line from (ax, ay) to (bx, by), mm; a point when both are the same. */
export type Line = readonly [ax: number, ay: number, bx: number, by: number];

/** The points of two straight lines nearest to each other: the crossing, or one that is an end of a line. */
export function closestPoints(one: Line, two: Line): Closest {
  const [ax, ay, bx, by] = one;
  const [cx, cy, dx, dy] = two;
  const ux = bx - ax;
  const uy = by - ay;
  const vx = dx - cx;
  const vy = dy - cy;
  const cross = ux * vy - uy * vx;
  if (cross !== 0) {
    const wx = cx - ax;
    const wy = cy - ay;
    const s = (wx * vy - wy * vx) / cross;
    const t = (wx * uy - wy * ux) / cross;
    if (s >= 0 && s <= 1 && t >= 0 && t <= 1) {
      const x = ax + s * ux;
      const y = ay + s * uy;
      return { distanceMm: 0, x1: x, y1: y, x2: x, y2: y };
    }
  }
  let best = fromPoint(ax, ay, two);
  best = nearer(best, fromPoint(bx, by, two));
  best = nearer(best, turned(fromPoint(cx, cy, one)));
  return nearer(best, turned(fromPoint(dx, dy, one)));
}

/** The stretch [from, to] (mm along the line) that lies within a distance of another line; null when none does. */
export function stretchWithin(line: Line, other: Line, withinMm: number): readonly [number, number] | null {
  const [ax, ay, bx, by] = line;
  const [cx, cy, dx, dy] = other;
  const span = Math.hypot(bx - ax, by - ay);
  const length = Math.hypot(dx - cx, dy - cy);
  const ux = (bx - ax) / span;
  const uy = (by - ay) / span;
  // All points within a distance of a line are a convex area: a rectangle and two discs, and the stretch is one piece.
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  const add = (from: number, to: number): void => {
    const a = Math.max(0, from);
    const b = Math.min(span, to);
    if (a > b) return;
    low = Math.min(low, a);
    high = Math.max(high, b);
  };
  for (const [px, py] of [
    [cx, cy],
    [dx, dy],
  ]) {
    const along = (px - ax) * ux + (py - ay) * uy;
    const across = (py - ay) * ux - (px - ax) * uy;
    const squared = withinMm * withinMm - across * across;
    if (squared >= 0) add(along - Math.sqrt(squared), along + Math.sqrt(squared));
  }
  if (length > 0) {
    const vx = (dx - cx) / length;
    const vy = (dy - cy) / length;
    const [fromAcross, toAcross] = band(
      (ay - cy) * vx - (ax - cx) * vy,
      uy * vx - ux * vy,
      -withinMm,
      withinMm,
      span,
    );
    const [fromAlong, toAlong] = band((ax - cx) * vx + (ay - cy) * vy, ux * vx + uy * vy, 0, length, span);
    add(Math.max(fromAcross, fromAlong), Math.min(toAcross, toAlong));
  }
  return low <= high ? [low, high] : null;
}

/** Where w0 + t·dw lies between two values, for t from 0 to span; empty (from > to) when nowhere. */
function band(w0: number, dw: number, low: number, high: number, span: number): readonly [number, number] {
  if (Math.abs(dw) * span < 1e-13 * (1 + Math.abs(w0))) return w0 >= low && w0 <= high ? [0, span] : [1, 0];
  const t1 = (low - w0) / dw;
  const t2 = (high - w0) / dw;
  return [Math.min(t1, t2), Math.max(t1, t2)];
}

function fromPoint(px: number, py: number, [ax, ay, bx, by]: Line): Closest {
  const t = nearestParameter(px, py, ax, ay, bx, by);
  const x2 = ax + t * (bx - ax);
  const y2 = ay + t * (by - ay);
  return { distanceMm: Math.hypot(px - x2, py - y2), x1: px, y1: py, x2, y2 };
}

export function nearer(one: Closest, two: Closest): Closest {
  return two.distanceMm < one.distanceMm ? two : one;
}

export function turned({ distanceMm, x1, y1, x2, y2 }: Closest): Closest {
  return { distanceMm, x1: x2, y1: y2, x2: x1, y2: y1 };
}
