/** Points and directions of the plane, mm, y down. */
export interface Point {
  readonly x: number;
  readonly y: number;
}

export const plus = (p: Point, u: Point, by = 1): Point => ({ x: p.x + u.x * by, y: p.y + u.y * by });
export const minus = (p: Point, q: Point): Point => ({ x: p.x - q.x, y: p.y - q.y });
export const dot = (u: Point, v: Point): number => u.x * v.x + u.y * v.y;
export const cross = (u: Point, v: Point): number => u.x * v.y - u.y * v.x;
export const distance = (p: Point, q: Point): number => Math.hypot(p.x - q.x, p.y - q.y);

/** Unit vector from p to q. */
export function direction(p: Point, q: Point): Point {
  const length = distance(p, q);
  return { x: (q.x - p.x) / length, y: (q.y - p.y) / length };
}

/** How far along the segment from p to q its point nearest to x lies, as a share 0 … 1. */
export function nearestShare(x: Point, p: Point, q: Point): number {
  const u = minus(q, p);
  return Math.min(1, Math.max(0, dot(minus(x, p), u) / dot(u, u)));
}
