/**
 * The smallest rectangle, at any angle, round a set of points.
 *
 * One side of the smallest rectangle lies along a side of the convex hull (H. Freeman & R. Shapira, Comm. ACM 18 (1975)
 * 409), so the hull is turned once, with the farthest points followed as callipers (G. T. Toussaint, 1983).
 * Cost: n log n for the hull (A. M. Andrew, Inf. Proc. Lett. 9 (1979) 216), then linear.
 */
import { orient2d } from 'robust-predicates';

export interface Rectangle {
  readonly longSide: number;
  readonly shortSide: number;
}

/**
 * @param points x0 y0 x1 y1 …, in any unit; sides come back in it
 * @returns null without any point; a side is 0 when the points lie on one line
 */
export function smallestRectangle(points: ArrayLike<number>): Rectangle | null {
  const hull = convexHull(points);
  const n = hull.length;
  if (n === 0) return null;
  if (n < 3) {
    const [a, b] = [hull[0], hull[n - 1]];
    return { longSide: Math.hypot(b[0] - a[0], b[1] - a[1]), shortSide: 0 };
  }
  let best: Rectangle | null = null;
  let bestArea = Infinity;
  let [far, left, right] = [1, 1, 1];
  for (let i = 0; i < n; i++) {
    const a = hull[i];
    const b = hull[(i + 1) % n];
    const size = Math.hypot(b[0] - a[0], b[1] - a[1]);
    const [ux, uy] = [(b[0] - a[0]) / size, (b[1] - a[1]) / size];
    const along = (k: number): number => (hull[k % n][0] - a[0]) * ux + (hull[k % n][1] - a[1]) * uy;
    const across = (k: number): number => (hull[k % n][1] - a[1]) * ux - (hull[k % n][0] - a[0]) * uy;
    // The hull turns one way, so each calliper only ever moves on; it never passes a whole round.
    right = advance(Math.max(right, i + 1), i + n, along);
    far = advance(Math.max(far, right), i + n, across);
    left = advance(Math.max(left, far), i + n, (k) => -along(k));
    const width = along(right) - Math.min(along(left), 0);
    const height = across(far);
    if (width * height < bestArea) {
      bestArea = width * height;
      best = { longSide: Math.max(width, height), shortSide: Math.min(width, height) };
    }
  }
  return best;
}

function advance(start: number, end: number, measure: (k: number) => number): number {
  let k = start;
  while (k < end && measure(k + 1) >= measure(k)) k++;
  return k;
}

type Point = readonly [number, number];

/** Counter-clockwise in axes with y up, no three on a line. */
function convexHull(points: ArrayLike<number>): Point[] {
  const sorted: Point[] = [];
  for (let i = 0; i + 1 < points.length; i += 2) sorted.push([points[i], points[i + 1]]);
  sorted.sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  const distinct = sorted.filter((p, i) => i === 0 || p[0] !== sorted[i - 1][0] || p[1] !== sorted[i - 1][1]);
  if (distinct.length < 3) return distinct;
  const lower = chain(distinct);
  const upper = chain(distinct.reverse());
  return [...lower.slice(0, -1), ...upper.slice(0, -1)];
}

function chain(points: readonly Point[]): Point[] {
  const hull: Point[] = [];
  for (const p of points) {
    while (hull.length >= 2 && !turnsLeft(hull[hull.length - 2], hull[hull.length - 1], p)) hull.pop();
    hull.push(p);
  }
  return hull;
}

/** orient2d is positive for a clockwise turn in axes with y up. */
function turnsLeft(a: Point, b: Point, c: Point): boolean {
  return orient2d(a[0], a[1], b[0], b[1], c[0], c[1]) < 0;
}
