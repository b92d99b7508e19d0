import { crossingParameter, nearestParameter } from '../geometry/segment.ts';

/** A point of the drawing, mm. */
export interface Place {
  readonly xMm: number;
  readonly yMm: number;
}

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

/** A point as a line without length. */
export function pointLine(x: number, y: number): Line {
  return [x, y, x, y];
}

/** The straight lines from each point to the next, of x0 y0 x1 y1 … */
export function linesAlong(points: Float64Array): Line[] {
  const lines: Line[] = [];
  for (let i = 0; i + 3 < points.length; i += 2)
    lines.push([points[i], points[i + 1], points[i + 2], points[i + 3]]);
  return lines;
}

/** Left, top, right and bottom of what lies within a reach of a line along the axes. */
export function boxRound([ax, ay, bx, by]: Line, reach: number): readonly [number, number, number, number] {
  return [
    Math.min(ax, bx) - reach,
    Math.min(ay, by) - reach,
    Math.max(ax, bx) + reach,
    Math.max(ay, by) + reach,
  ];
}

/** The points of two straight lines nearest to each other: the crossing, or one that is an end of a line. */
export function closestPoints(one: Line, two: Line): Closest {
  const [ax, ay, bx, by] = one;
  const [cx, cy, dx, dy] = two;
  const ux = bx - ax;
  const uy = by - ay;
  const vx = dx - cx;
  const vy = dy - cy;
  const s = crossingParameter(...one, ...two);
  if (s >= 0) {
    const x = ax + s * ux;
    const y = ay + s * uy;
    return { distanceMm: 0, x1: x, y1: y, x2: x, y2: y };
  }
  // Not crossing: the nearest place is at one of the four ends.
  const atA = nearestParameter(ax, ay, cx, cy, dx, dy);
  const atB = nearestParameter(bx, by, cx, cy, dx, dy);
  const atC = nearestParameter(cx, cy, ax, ay, bx, by);
  const atD = nearestParameter(dx, dy, ax, ay, bx, by);
  const fromA = Math.hypot(ax - cx - atA * vx, ay - cy - atA * vy);
  const fromB = Math.hypot(bx - cx - atB * vx, by - cy - atB * vy);
  const fromC = Math.hypot(cx - ax - atC * ux, cy - ay - atC * uy);
  const fromD = Math.hypot(dx - ax - atD * ux, dy - ay - atD * uy);
  const distanceMm = Math.min(fromA, fromB, fromC, fromD);
  if (fromA === distanceMm) return { distanceMm, x1: ax, y1: ay, x2: cx + atA * vx, y2: cy + atA * vy };
  if (fromB === distanceMm) return { distanceMm, x1: bx, y1: by, x2: cx + atB * vx, y2: cy + atB * vy };
  if (fromC === distanceMm) return { distanceMm, x1: ax + atC * ux, y1: ay + atC * uy, x2: cx, y2: cy };
  return { distanceMm, x1: ax + atD * ux, y1: ay + atD * uy, x2: dx, y2: dy };
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
  add(disc(cx, cy));
  if (length > 0) {
    add(disc(dx, dy));
    const vx = (dx - cx) / length;
    const vy = (dy - cy) / length;
    const across = band((ay - cy) * vx - (ax - cx) * vy, uy * vx - ux * vy, -withinMm, withinMm, span);
    const along = band((ax - cx) * vx + (ay - cy) * vy, ux * vx + uy * vy, 0, length, span);
    add([Math.max(across[0], along[0]), Math.min(across[1], along[1])]);
  }
  return low <= high ? [low, high] : null;

  function add([from, to]: readonly [number, number]): void {
    const first = Math.max(0, from);
    const last = Math.min(span, to);
    if (first > last) return;
    low = Math.min(low, first);
    high = Math.max(high, last);
  }

  function disc(px: number, py: number): readonly [number, number] {
    const along = (px - ax) * ux + (py - ay) * uy;
    const across = (py - ay) * ux - (px - ax) * uy;
    const squared = withinMm * withinMm - across * across;
    return squared >= 0 ? [along - Math.sqrt(squared), along + Math.sqrt(squared)] : [1, 0];
  }
}

/** Where w0 + t·dw lies between two values, for t from 0 to span; empty (from > to) when nowhere. */
function band(w0: number, dw: number, low: number, high: number, span: number): readonly [number, number] {
  if (Math.abs(dw) * span < 1e-13 * (1 + Math.abs(w0))) return w0 >= low && w0 <= high ? [0, span] : [1, 0];
  const t1 = (low - w0) / dw;
  const t2 = (high - w0) / dw;
  return [Math.min(t1, t2), Math.max(t1, t2)];
}

export function middleOf([x1, y1, x2, y2]: Line): Place {
  return { xMm: (x1 + x2) / 2, yMm: (y1 + y2) / 2 };
}

export function lineBetween({ x1, y1, x2, y2 }: Closest): Line {
  return [x1, y1, x2, y2];
}

/** The same, told from the second shape. */
export function turned({ distanceMm, x1, y1, x2, y2 }: Closest): Closest {
  return { distanceMm, x1: x2, y1: y2, x2: x1, y2: y1 };
}

export function nearer(one: Closest, two: Closest): Closest {
  return two.distanceMm < one.distanceMm ? two : one;
}
