/**
 * Path commands → straight pieces, after the transform.
 *
 * The summed chords stay within 1e-4 of the curve's length (CURVE_TOLERANCE), and every piece keeps the curve's radius.
 * - A circular arc of angle θ loses 1 − sin(θ/2)/(θ/2) ≈ θ²/24 of its length to its chord, so θ ≤ √(24 · 0.96e-4) = 0.048.
 * - A cubic with chord c and control polygon p is about (c + p)/2 long, a conic with tangent legs p about (2c + p)/3 (the
 *   degree-n rule (2c + (n − 1)p)/(n + 1) of J. Gravesen, Comput. Geom. 8 (1997) 13), and never longer than p: it is halved
 *   until the estimated loss, (p − c)/2 or (p − c)/3, is within the tolerance.
 * Cost: linear in the pieces. A cusp, where no piece is straight enough, ends at a millionth of the curve.
 */
import { Bounds } from '../geometry/bounds.ts';
import { type Curve, type Ellipse, ellipseX, ellipseY } from '../geometry/curve.ts';
import type { Matrix, PathCommand } from '../svg/types.ts';
import { ValueError } from '../svg/value-error.ts';
import type { Centreline } from './types.ts';

export interface Flattened {
  readonly subpaths: readonly Centreline[];
  /** Subpaths that were drawn and have no length. */
  readonly zeroLength: number;
}

/** Pieces that may still be made; counted down in place over a whole drawing. */
export interface PieceBudget {
  piecesLeft: number;
}

/** "2 million segments" of the whole drawing. */
export const MAX_PIECES = 2_000_000;

/** Summed chords are within this share of the curve's length. */
export const CURVE_TOLERANCE = 1e-4;

/**
 * @param toRoot applied before anything is measured; radii are in its target units.
 * @throws ValueError when a point lies beyond ±1e12 or the budget of pieces is spent.
 */
export function flatten(path: readonly PathCommand[], toRoot: Matrix, budget: PieceBudget): Flattened {
  const line = new Polyline(toRoot, budget);
  for (const command of path) line.draw(command);
  line.endSubpath('open');
  return { subpaths: line.subpaths, zeroLength: line.zeroLength };
}

/** Share of the tolerance that is used; the rest covers what the estimates neglect. */
const LOSS = 0.96 * CURVE_TOLERANCE;

const MAX_ARC_ANGLE = Math.sqrt(24 * LOSS);

/** A piece of this share of its curve is taken as it is: twice that is the most a cusp can lose. */
const SMALLEST_SHARE = 1e-6;

/** A piece whose radius is a million times its length bends by a microradian: it is straight. */
const STRAIGHT = 1e6;

/** First and last point nearer than this share of the subpath's extent are the same point. */
const ENDS_MEET = 1e-9;

/** Coordinates beyond this leave no digits for a chip, and their cubes would overflow. */
export const MAX_COORDINATE = 1e12;

class Polyline {
  readonly subpaths: Centreline[] = [];
  zeroLength = 0;
  readonly #matrix: Matrix;
  readonly #budget: PieceBudget;
  /** The subpath being drawn. */
  #points: number[] = [];
  #radii: number[] = [];
  #curves: (Curve | null)[] = [];
  /** In the path's own units: where the pen is, and where the subpath began. */
  #x = 0;
  #y = 0;
  #startX = 0;
  #startY = 0;

  constructor(matrix: Matrix, budget: PieceBudget) {
    this.#matrix = matrix;
    this.#budget = budget;
  }

  draw(command: PathCommand): void {
    switch (command.kind) {
      case 'move':
        this.endSubpath('open');
        this.#startX = command.x;
        this.#startY = command.y;
        break;
      case 'line':
        this.#begin();
        this.#add(this.#mapX(command.x, command.y), this.#mapY(command.x, command.y), 0, null);
        break;
      case 'cubic':
        this.#begin();
        this.#cubic(command.x1, command.y1, command.x2, command.y2, command.x, command.y);
        break;
      case 'quadratic': {
        this.#begin();
        const { x1, y1, x, y } = command;
        // The same curve as a cubic.
        const [ax, ay] = [this.#x + (2 / 3) * (x1 - this.#x), this.#y + (2 / 3) * (y1 - this.#y)];
        this.#cubic(ax, ay, x + (2 / 3) * (x1 - x), y + (2 / 3) * (y1 - y), x, y);
        break;
      }
      case 'arc':
        this.#begin();
        this.#arc(command);
        break;
      case 'close':
        this.endSubpath('closed');
        this.#x = this.#startX;
        this.#y = this.#startY;
        return;
      default:
        command satisfies never;
    }
    this.#x = command.x;
    this.#y = command.y;
  }

  endSubpath(how: 'open' | 'closed'): void {
    const points = this.#points;
    if (points.length > 0) {
      if (how === 'closed') this.#add(points[0], points[1], 0, null);
      const made = tidy(points, this.#radii, this.#curves, how);
      if (made === null) this.zeroLength++;
      else this.subpaths.push(made);
    } else if (how === 'closed') this.zeroLength++;
    this.#points = [];
    this.#radii = [];
    this.#curves = [];
  }

  /** The first drawing command after a move or a close starts a subpath where the pen is. */
  #begin(): void {
    if (this.#points.length > 0) return;
    this.#x = this.#startX;
    this.#y = this.#startY;
    this.#points.push(this.#mapX(this.#x, this.#y), this.#mapY(this.#x, this.#y));
  }

  #add(x: number, y: number, radius: number, curve: Curve | null): void {
    if (--this.#budget.piecesLeft < 0) {
      throw new ValueError(
        `the drawing has more than ${MAX_PIECES} segments (the limit); split or simplify it`,
      );
    }
    this.#points.push(x, y);
    this.#radii.push(radius);
    this.#curves.push(curve);
  }

  #mapX(x: number, y: number): number {
    return within(this.#matrix[0] * x + this.#matrix[2] * y + this.#matrix[4]);
  }

  #mapY(x: number, y: number): number {
    return within(this.#matrix[1] * x + this.#matrix[3] * y + this.#matrix[5]);
  }

  #cubic(x1: number, y1: number, x2: number, y2: number, x3: number, y3: number): void {
    const X = [this.#mapX(this.#x, this.#y), this.#mapX(x1, y1), this.#mapX(x2, y2), this.#mapX(x3, y3)];
    const Y = [this.#mapY(this.#x, this.#y), this.#mapY(x1, y1), this.#mapY(x2, y2), this.#mapY(x3, y3)];
    const whole =
      length(X[1] - X[0], Y[1] - Y[0]) + length(X[2] - X[1], Y[2] - Y[1]) + length(X[3] - X[2], Y[3] - Y[2]);
    this.#cubicPieces(X[0], Y[0], X[1], Y[1], X[2], Y[2], X[3], Y[3], whole * SMALLEST_SHARE);
  }

  /** Halves by de Casteljau; the depth is bounded because each half's polygon is at most about half as long, or straight. */
  #cubicPieces(
    x0: number,
    y0: number,
    x1: number,
    y1: number,
    x2: number,
    y2: number,
    x3: number,
    y3: number,
    smallest: number,
  ): void {
    const chord = length(x3 - x0, y3 - y0);
    const polygon = length(x1 - x0, y1 - y0) + length(x2 - x1, y2 - y1) + length(x3 - x2, y3 - y2);
    if (polygon - chord <= LOSS * (polygon + chord) || polygon <= smallest) {
      const points = [x0, y0, x1, y1, x2, y2, x3, y3];
      const curve = polygon > chord ? ({ kind: 'cubic', points } as const) : null;
      this.#add(x3, y3, middleRadius(points, chord), curve);
      return;
    }
    const ax = (x0 + x1) / 2;
    const ay = (y0 + y1) / 2;
    const bx = (x1 + x2) / 2;
    const by = (y1 + y2) / 2;
    const cx = (x2 + x3) / 2;
    const cy = (y2 + y3) / 2;
    const abx = (ax + bx) / 2;
    const aby = (ay + by) / 2;
    const bcx = (bx + cx) / 2;
    const bcy = (by + cy) / 2;
    const mx = (abx + bcx) / 2;
    const my = (aby + bcy) / 2;
    this.#cubicPieces(x0, y0, ax, ay, abx, aby, mx, my, smallest);
    this.#cubicPieces(mx, my, bcx, bcy, cx, cy, x3, y3, smallest);
  }

  #arc(command: PathCommand & { readonly kind: 'arc' }): void {
    const endX = this.#mapX(command.x, command.y);
    const endY = this.#mapY(command.x, command.y);
    const arc = centreForm(this.#x, this.#y, command);
    if (arc === 'nothing') return;
    if (arc === 'line') {
      this.#add(endX, endY, 0, null);
      return;
    }
    const [a, b, c, d] = this.#matrix;
    const ellipse: Ellipse = {
      cx: this.#mapX(arc.cx, arc.cy),
      cy: this.#mapY(arc.cx, arc.cy),
      ux: within(a * arc.ux + c * arc.uy),
      uy: within(b * arc.ux + d * arc.uy),
      vx: within(a * arc.vx + c * arc.vy),
      vy: within(b * arc.vx + d * arc.vy),
    };
    if (isCircle(ellipse)) this.#circleArc(ellipse, arc.from, arc.sweep, endX, endY);
    else {
      const smallest = SMALLEST_SHARE * (length(ellipse.ux, ellipse.uy) + length(ellipse.vx, ellipse.vy));
      // The tangent legs of the rule exist for less than half a turn: start from quarters at most.
      const parts = Math.ceil(Math.abs(arc.sweep) / (Math.PI / 2));
      for (let i = 0; i < parts; i++) {
        const from = arc.from + (arc.sweep * i) / parts;
        const to = arc.from + (arc.sweep * (i + 1)) / parts;
        this.#ellipsePieces(ellipse, from, to, smallest, i === parts - 1 ? [endX, endY] : null);
      }
    }
  }

  #circleArc(circle: Ellipse, from: number, sweep: number, endX: number, endY: number): void {
    const radius = Math.sqrt((circle.ux ** 2 + circle.uy ** 2 + circle.vx ** 2 + circle.vy ** 2) / 2);
    const pieces = Math.max(1, Math.ceil(Math.abs(sweep) / MAX_ARC_ANGLE));
    let last = from;
    for (let i = 1; i < pieces; i++) {
      const t = from + (sweep * i) / pieces;
      const curve = { kind: 'arc', ellipse: circle, from: last, to: t } as const;
      this.#add(ellipseX(circle, t), ellipseY(circle, t), radius, curve);
      last = t;
    }
    this.#add(endX, endY, radius, { kind: 'arc', ellipse: circle, from: last, to: from + sweep });
  }

  #ellipsePieces(
    e: Ellipse,
    from: number,
    to: number,
    smallest: number,
    end: readonly [number, number] | null,
  ): void {
    const half = (to - from) / 2;
    const middle = from + half;
    const [x0, y0] = [ellipseX(e, from), ellipseY(e, from)];
    const [x1, y1] = [ellipseX(e, to), ellipseY(e, to)];
    // The tangents at both ends meet at the middle's direction, 1/cos(half) as far out.
    const cos = Math.cos(half);
    const kx = e.cx + (e.ux * Math.cos(middle) + e.vx * Math.sin(middle)) / cos;
    const ky = e.cy + (e.uy * Math.cos(middle) + e.vy * Math.sin(middle)) / cos;
    const chord = length(x1 - x0, y1 - y0);
    const legs = length(kx - x0, ky - y0) + length(x1 - kx, y1 - ky);
    if (legs - chord <= LOSS * (2 * chord + legs) || legs <= smallest) {
      const curve = { kind: 'arc', ellipse: e, from, to } as const;
      this.#add(end?.[0] ?? x1, end?.[1] ?? y1, ellipseRadius(e, middle, chord), curve);
      return;
    }
    this.#ellipsePieces(e, from, middle, smallest, null);
    this.#ellipsePieces(e, middle, to, smallest, end);
  }
}

interface CentreForm extends Ellipse {
  readonly from: number;
  readonly sweep: number;
}

/** Endpoint form → centre form (SVG 2, B.2.4 and B.2.5), in the path's own units. */
function centreForm(
  x1: number,
  y1: number,
  arc: PathCommand & { readonly kind: 'arc' },
): CentreForm | 'line' | 'nothing' {
  const { x: x2, y: y2, rotationDeg, large, sweep } = arc;
  if (x1 === x2 && y1 === y2) return 'nothing';
  if (arc.rx === 0 || arc.ry === 0) return 'line';
  const phi = (rotationDeg * Math.PI) / 180;
  const cos = rotationDeg === 0 ? 1 : Math.cos(phi);
  const sin = rotationDeg === 0 ? 0 : Math.sin(phi);
  const hx = (x1 - x2) / 2;
  const hy = (y1 - y2) / 2;
  // Half the chord, in the frame where the ellipse is the unit circle.
  const px = (cos * hx + sin * hy) / arc.rx;
  const py = (cos * hy - sin * hx) / arc.ry;
  const halfChord = Math.hypot(px, py);
  // Radii too small to span the chord are scaled up until they just do.
  const grown = Math.max(1, halfChord);
  const rx = arc.rx * grown;
  const ry = arc.ry * grown;
  const qx = px / grown;
  const qy = py / grown;
  const unitHalf = halfChord / grown;
  const off = (Math.sqrt(Math.max(0, 1 - unitHalf * unitHalf)) / unitHalf) * (large === sweep ? -1 : 1);
  // Centre on the unit circle's plane, measured from the chord's middle.
  const mx = off * qy;
  const my = -off * qx;
  const from = Math.atan2(qy - my, qx - mx);
  const to = Math.atan2(-qy - my, -qx - mx);
  let turn = to - from;
  if (sweep && turn <= 0) turn += 2 * Math.PI;
  if (!sweep && turn >= 0) turn -= 2 * Math.PI;
  return {
    cx: (x1 + x2) / 2 + cos * rx * mx - sin * ry * my,
    cy: (y1 + y2) / 2 + sin * rx * mx + cos * ry * my,
    ux: rx * cos,
    uy: rx * sin,
    vx: -ry * sin,
    vy: ry * cos,
    from,
    sweep: turn,
  };
}

/** Axes of equal length at right angles, to the same 1e-6 as a similarity. */
function isCircle({ ux, uy, vx, vy }: Ellipse): boolean {
  const u = ux * ux + uy * uy;
  const v = vx * vx + vy * vy;
  return Math.abs(u - v) <= 2e-6 * (u + v) && Math.abs(ux * vx + uy * vy) <= 1e-6 * (u + v);
}

/** |P′|³ / |P′ × P″|, where P′ × P″ = u × v everywhere on the ellipse. */
function ellipseRadius(e: Ellipse, t: number, chord: number): number {
  const dx = e.vx * Math.cos(t) - e.ux * Math.sin(t);
  const dy = e.vy * Math.cos(t) - e.uy * Math.sin(t);
  return bend(length(dx, dy) ** 3 / Math.abs(e.ux * e.vy - e.uy * e.vx), chord);
}

/** |P′|³ / |P′ × P″| of a cubic at its middle, where P′ = ¾(P3 + P2 − P1 − P0) and P″ = 3(P0 − P1 − P2 + P3). */
function middleRadius([x0, y0, x1, y1, x2, y2, x3, y3]: readonly number[], chord: number): number {
  const dx = 0.75 * (x3 + x2 - x1 - x0);
  const dy = 0.75 * (y3 + y2 - y1 - y0);
  const ddx = 3 * (x0 - x1 - x2 + x3);
  const ddy = 3 * (y0 - y1 - y2 + y3);
  return bend(length(dx, dy) ** 3 / Math.abs(dx * ddy - dy * ddx), chord);
}

function bend(radius: number, chord: number): number {
  return radius <= STRAIGHT * chord ? radius : 0;
}

function length(dx: number, dy: number): number {
  return Math.sqrt(dx * dx + dy * dy);
}

function within(coordinate: number): number {
  if (Math.abs(coordinate) <= MAX_COORDINATE) return coordinate;
  throw new ValueError(`a point lies beyond ±${MAX_COORDINATE} units; move or scale the drawing`);
}

/**
 * Drops points that repeat the one before (to rounding), makes ends that meet exactly the same, and turns a closed path
 * of two points into the line that it is. Null when no length is left.
 */
function tidy(
  points: number[],
  radii: readonly number[],
  curves: readonly (Curve | null)[],
  how: 'open' | 'closed',
): Centreline | null {
  const { extent, largest } = measure(points);
  // Rounding of coordinates as large as these, and of as small a path.
  const same = 1e-12 * extent + 4 * Number.EPSILON * largest;
  if (extent <= same) return null;
  const last = points.length - 2;
  const meeting = ENDS_MEET * extent + same;
  const endsMeet = length(points[last] - points[0], points[last + 1] - points[1]) <= meeting;
  if (endsMeet) {
    points[last] = points[0];
    points[last + 1] = points[1];
  }
  const kept: number[] = [points[0], points[1]];
  const keptRadii: number[] = [];
  const keptCurves: (Curve | null)[] = [];
  for (let i = 1; i < points.length / 2; i++) {
    const x = points[2 * i];
    const y = points[2 * i + 1];
    const isEnd = i === points.length / 2 - 1;
    // A closing line to a start that was already reached is none.
    const tolerance = isEnd && how === 'closed' ? meeting : same;
    if (length(x - kept[kept.length - 2], y - kept[kept.length - 1]) > tolerance) {
      kept.push(x, y);
      keptRadii.push(radii[i - 1]);
      keptCurves.push(curves[i - 1]);
    } else if (isEnd && kept.length > 2) {
      // The true end stays; the point before gives way, and so does one that then coincides with the end.
      let radius = 0;
      let curve: Curve | null = null;
      do {
        kept.length -= 2;
        radius = keptRadii.pop() ?? 0;
        curve = keptCurves.pop() ?? null;
      } while (kept.length > 2 && length(x - kept[kept.length - 2], y - kept[kept.length - 1]) <= same);
      kept.push(x, y);
      keptRadii.push(radius);
      keptCurves.push(curve);
    }
  }
  if (kept.length < 4) return null;
  const isThereAndBack = endsMeet && kept.length === 6;
  if (isThereAndBack && how === 'closed') {
    kept.length = 4;
    keptRadii.length = 1;
    keptCurves.length = 1;
  }
  return {
    points: Float64Array.from(kept),
    closed: how === 'closed' && !isThereAndBack,
    bendRadius: Float64Array.from(keptRadii),
    curves: keptCurves.some((curve) => curve !== null) ? keptCurves : null,
  };
}

function measure(points: readonly number[]): { readonly extent: number; readonly largest: number } {
  const bounds = new Bounds();
  bounds.addLine(points);
  const { left, top, right, bottom } = bounds;
  const largest = Math.max(Math.abs(left), Math.abs(right), Math.abs(top), Math.abs(bottom));
  return { extent: length(right - left, bottom - top), largest };
}
