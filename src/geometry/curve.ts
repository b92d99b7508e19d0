/**
 * The curve that a straight piece was cut from. Pieces are cut coarsely, for lengths; where a wall is measured at them they
 * are cut again, finely, from the curve itself (fine-cuts.ts). Plain numbers, in the unit of whoever holds the curve.
 */

/** The centre and two conjugate half-axes: any image of a circle under a 2 × 3 matrix. */
export interface Ellipse {
  readonly cx: number;
  readonly cy: number;
  readonly ux: number;
  readonly uy: number;
  readonly vx: number;
  readonly vy: number;
}

/** P(t) = centre + u cos t + v sin t for t from `from` to `to`. */
export interface EllipticArc {
  readonly kind: 'arc';
  readonly ellipse: Ellipse;
  readonly from: number;
  readonly to: number;
}

/** A Bézier curve by its four points, for t from 0 to 1. */
export interface Cubic {
  readonly kind: 'cubic';
  /** x0 y0 x1 y1 x2 y2 x3 y3 */
  readonly points: readonly number[];
}

export type Curve = EllipticArc | Cubic;

/** A curve lies no further than this from the pieces that a wall is measured at, mm: two of them stay within 0.1 µm. */
export const FINE_MM = 4e-5;

export function ellipseX(e: Ellipse, t: number): number {
  return e.cx + e.ux * Math.cos(t) + e.vx * Math.sin(t);
}

export function ellipseY(e: Ellipse, t: number): number {
  return e.cy + e.uy * Math.cos(t) + e.vy * Math.sin(t);
}

/** The same for the curves of a row of pieces, null for those that are straight. */
export function scaledCurves(
  curves: readonly (Curve | null)[] | null,
  factor: number,
): readonly (Curve | null)[] | null {
  return curves?.map((curve) => curve && scaledCurve(curve, factor)) ?? null;
}

function scaledCurve(curve: Curve, factor: number): Curve {
  if (curve.kind === 'cubic') {
    return { kind: 'cubic', points: curve.points.map((coordinate) => coordinate * factor) };
  }
  const { cx, cy, ux, uy, vx, vy } = curve.ellipse;
  const ellipse = {
    cx: cx * factor,
    cy: cy * factor,
    ux: ux * factor,
    uy: uy * factor,
    vx: vx * factor,
    vy: vy * factor,
  };
  return { ...curve, ellipse };
}

/**
 * How far the curve lies from its chord, at most. Exact for an arc of less than half a turn; for a cubic the bound
 * 3t(1 − t)² |d₁| + 3t²(1 − t) |d₂| ≤ ¾ max |d| by the distances d of its control points from the chord's line, and what
 * they reach beyond its ends.
 */
export function departure(curve: Curve): number {
  return curve.kind === 'arc' ? arcDeparture(curve) : cubicDeparture(curve.points);
}

/** Unit direction in which the curve starts, or comes to its end; null where it has none. */
export function directionAtEnd(curve: Curve, end: 'start' | 'end'): readonly [number, number] | null {
  if (curve.kind === 'arc') {
    const { ellipse, from, to } = curve;
    const t = end === 'start' ? from : to;
    const sign = to > from ? 1 : -1;
    return unit(
      sign * (ellipse.vx * Math.cos(t) - ellipse.ux * Math.sin(t)),
      sign * (ellipse.vy * Math.cos(t) - ellipse.uy * Math.sin(t)),
    );
  }
  const p = curve.points;
  // Where a control point lies on the end the next one gives the direction.
  const order = end === 'start' ? [2, 4, 6] : [4, 2, 0];
  const at = end === 'start' ? 0 : 6;
  const sign = end === 'start' ? 1 : -1;
  const reach = Math.hypot(p[6] - p[0], p[7] - p[1]);
  for (const k of order) {
    const dx = sign * (p[k] - p[at]);
    const dy = sign * (p[k + 1] - p[at + 1]);
    if (Math.hypot(dx, dy) > 1e-9 * reach) return unit(dx, dy);
  }
  return null;
}

/** A straight stretch of a curve from the point before it to (x, y). */
export interface FinePiece {
  readonly x: number;
  readonly y: number;
  /** How far the curve lies from it, at most. */
  readonly departure: number;
}

/** The curve as straight pieces from which it departs by no more than `tolerance`. The last one ends at the curve's end. */
export function finePieces(curve: Curve, tolerance: number): FinePiece[] {
  const pieces: FinePiece[] = [];
  addFinePieces(pieces, curve, tolerance, MAX_DEPTH);
  return pieces;
}

/** A departure falls about with the square of the pieces, so a second round is seldom needed; a cusp ends here. */
const MAX_DEPTH = 12;

/** No chip's arc needs more at once: a departure of a millimetre needs 160. */
const MAX_PARTS = 1000;

function addFinePieces(into: FinePiece[], curve: Curve, tolerance: number, depth: number): void {
  const off = departure(curve);
  if (off <= tolerance || depth === 0) {
    const [x, y] = endOf(curve);
    into.push({ x, y, departure: off });
    return;
  }
  // A thousandth more, for a departure falls not quite with the square.
  const count = Math.min(MAX_PARTS, Math.max(2, Math.ceil(1.001 * Math.sqrt(off / tolerance))));
  let rest = curve;
  for (let k = count; k > 1; k--) {
    const [part, next] = split(rest, 1 / k);
    addFinePieces(into, part, tolerance, depth - 1);
    rest = next;
  }
  addFinePieces(into, rest, tolerance, depth - 1);
}

function endOf(curve: Curve): readonly [number, number] {
  if (curve.kind === 'cubic') return [curve.points[6], curve.points[7]];
  return [ellipseX(curve.ellipse, curve.to), ellipseY(curve.ellipse, curve.to)];
}

/** The curve up to a share of its parameter, and the rest of it (de Casteljau). */
function split(curve: Curve, share: number): readonly [Curve, Curve] {
  if (curve.kind === 'arc') {
    const middle = curve.from + share * (curve.to - curve.from);
    return [
      { ...curve, to: middle },
      { ...curve, from: middle },
    ];
  }
  const p = curve.points;
  const at = (a: number, b: number): number => a + share * (b - a);
  const first = [p[0], p[1], 0, 0, 0, 0, 0, 0];
  const second = [0, 0, 0, 0, 0, 0, p[6], p[7]];
  for (const k of [0, 1]) {
    const a = at(p[k], p[k + 2]);
    const b = at(p[k + 2], p[k + 4]);
    const c = at(p[k + 4], p[k + 6]);
    const ab = at(a, b);
    const bc = at(b, c);
    const middle = at(ab, bc);
    first[k + 2] = a;
    first[k + 4] = ab;
    first[k + 6] = middle;
    second[k] = middle;
    second[k + 2] = bc;
    second[k + 4] = c;
  }
  return [
    { kind: 'cubic', points: first },
    { kind: 'cubic', points: second },
  ];
}

/** The chord is the image of a circle's: its distance is the sagitta's image, seen across the chord's direction. */
function arcDeparture({ ellipse: { ux, uy, vx, vy }, from, to }: EllipticArc): number {
  const middle = (from + to) / 2;
  const dx = vx * Math.cos(middle) - ux * Math.sin(middle);
  const dy = vy * Math.cos(middle) - uy * Math.sin(middle);
  // 1 − cos of half the angle, without loss at small ones.
  const sagitta = 2 * Math.sin((to - from) / 4) ** 2;
  return (Math.abs(ux * vy - uy * vx) / Math.hypot(dx, dy)) * sagitta;
}

function cubicDeparture(p: readonly number[]): number {
  const dx = p[6] - p[0];
  const dy = p[7] - p[1];
  const chord = Math.hypot(dx, dy);
  if (chord === 0)
    return Math.max(Math.hypot(p[2] - p[0], p[3] - p[1]), Math.hypot(p[4] - p[0], p[5] - p[1]));
  let across = 0;
  let beyond = 0;
  for (const k of [2, 4]) {
    const along = ((p[k] - p[0]) * dx + (p[k + 1] - p[1]) * dy) / chord;
    across = Math.max(across, Math.abs(dx * (p[k + 1] - p[1]) - dy * (p[k] - p[0])) / chord);
    beyond = Math.max(beyond, -along, along - chord);
  }
  return Math.hypot(0.75 * across, beyond);
}

function unit(x: number, y: number): readonly [number, number] | null {
  const length = Math.hypot(x, y);
  return length > 0 ? [x / length, y / length] : null;
}
