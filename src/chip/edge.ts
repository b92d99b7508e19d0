import { InputError } from '../errors.ts';
import type { Curve } from '../geometry/curve.ts';
import type { Centreline, Hole, Layout, LayoutItem } from '../layout/types.ts';
import { layerKey } from '../runsheet/names.ts';
import { nearest } from '../runsheet/nearest.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';
import { CHIP_EDGE_NAME } from './defaults.ts';
import { smallestRectangle } from './rectangle.ts';
import { circleRing, closedRing, outerRings } from './rings.ts';

/** The chip edge in drawing units, and the drawn items it is made of. */
export interface DrawnEdge {
  readonly name: string;
  readonly ordinals: ReadonlySet<number>;
  readonly rings: readonly EdgeRing[];
  /** Longer first. */
  readonly sides: readonly [number, number];
}

export interface EdgeRing {
  /** x0 y0 x1 y1 …, first point repeated at the end. */
  readonly points: Float64Array;
  /** The curve that each side was cut from, null for a straight one; null when all are straight. */
  readonly curves: readonly (Curve | null)[] | null;
}

/**
 * The chip edge: the shape that the run sheet's `outline` names, else a shape (or else what is in a group) named
 * `chip-edge`. Any kind of shape will do, also a dashed one, so long as it closes.
 * @throws InputError when `outline` names nothing, or the shape does not close
 */
export function findEdge(layout: Layout, sheet: RunSheet | null, file: string): DrawnEdge | null {
  const asked = sheet?.outline ?? null;
  const name = asked ?? CHIP_EDGE_NAME;
  const items = named(layout.items, name);
  if (items.length === 0) {
    if (sheet === null || asked === null) return null;
    refuse(sheet, ['outline'], `outline: ${whyMissing(layout, asked)}`);
  }
  const drawn = items.flatMap(ringsOf);
  const outer = new Set(outerRings(drawn.map(({ points }) => points)));
  const rings = drawn.filter(({ points }) => outer.has(points));
  const sides = sidesOf(items, rings);
  if (sides === null || sides[1] <= 0) {
    const what = `the shape ${quote(name)} does not close; draw the chip edge as one closed shape`;
    if (sheet !== null && asked !== null) refuse(sheet, ['outline'], `outline: ${what}`);
    throw new InputError(file, what);
  }
  return { name, ordinals: new Set(items.map(({ ordinal }) => ordinal)), rings, sides };
}

function whyMissing({ items, undrawn }: Layout, asked: string): string {
  const hidden = undrawn.find(({ name }) => name === asked.trim());
  if (hidden !== undefined) return `${quote(asked)} is in the drawing but is not drawn: ${hidden.why}`;
  const names = new Set(items.flatMap(({ name }) => name ?? []));
  const near = nearest(asked, names);
  const hint = near === null ? '' : `; did you mean ${quote(near)}?`;
  return `the drawing has no shape ${quote(asked)}${hint}`;
}

function named(items: readonly LayoutItem[], name: string): readonly LayoutItem[] {
  const shapes = items.filter((item) => item.name === name.trim());
  if (shapes.length > 0) return shapes;
  const key = layerKey(name);
  return items.filter(
    (item) =>
      item.groups.some((group) => layerKey(group) === key) &&
      !(item.kind === 'ignored' && item.rings.length === 0),
  );
}

/** Corners of the polygon that stands for a round chip: it is within 5e-6 of the circle. */
const CIRCLE_CORNERS = 1024;

function ringsOf(item: LayoutItem): readonly EdgeRing[] {
  switch (item.kind) {
    case 'stroke':
      return item.centrelines.filter(closes).map(closed);
    case 'outline':
    case 'ignored':
      return item.rings
        .map((points, k) => ({ points, curves: item.ringCurves?.[k] ?? null }))
        .filter(({ points }) => points.length >= 6)
        .map(closed);
    case 'hole':
      return [roundRing(item)];
    default:
      return item satisfies never;
  }
}

function roundRing({ x, y, radius }: Hole): EdgeRing {
  const ellipse = { cx: x, cy: y, ux: radius, uy: 0, vx: 0, vy: radius };
  const angleAt = (i: number): number => (2 * Math.PI * i) / CIRCLE_CORNERS;
  const curves = Array.from(
    { length: CIRCLE_CORNERS },
    (_, i): Curve => ({ kind: 'arc', ellipse, from: angleAt(i), to: angleAt(i + 1) }),
  );
  return { points: circleRing(x, y, radius, CIRCLE_CORNERS), curves };
}

/** Closed, or open by less than a hundredth of the way from its first point to its farthest corner. */
function closes({ points, closed: isClosed }: Centreline): boolean {
  if (points.length < 6) return false;
  if (isClosed) return true;
  const n = points.length;
  const [x, y] = [points[0], points[1]];
  let reach = 0;
  for (let i = 2; i < n; i += 2) reach = Math.max(reach, Math.hypot(points[i] - x, points[i + 1] - y));
  return Math.hypot(points[n - 2] - x, points[n - 1] - y) < 0.01 * reach;
}

function closed({ points, curves }: EdgeRing): EdgeRing {
  const ring = closedRing(points);
  return { points: ring, curves: ring === points ? curves : curves && [...curves, null] };
}

function sidesOf(items: readonly LayoutItem[], rings: readonly EdgeRing[]): readonly [number, number] | null {
  const only = items[0];
  if (items.length === 1 && only?.kind === 'hole') return [2 * only.radius, 2 * only.radius];
  const rectangle = smallestRectangle(rings.flatMap(({ points }) => [...points]));
  return rectangle === null ? null : [rectangle.longSide, rectangle.shortSide];
}
