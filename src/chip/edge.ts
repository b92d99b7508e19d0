import { InputError } from '../errors.ts';
import type { Centreline, Layout, LayoutItem } from '../layout/types.ts';
import { layerKey } from '../runsheet/names.ts';
import { nearest } from '../runsheet/nearest.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';
import { CHIP_EDGE_NAME } from './defaults.ts';
import { smallestRectangle } from './rectangle.ts';
import { outerRings } from './rings.ts';

/** The chip edge in drawing units, and the drawn items it is made of. */
export interface DrawnEdge {
  readonly name: string;
  readonly ordinals: ReadonlySet<number>;
  readonly rings: readonly Float64Array[];
  /** Longer first. */
  readonly sides: readonly [number, number];
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
    const names = new Set<string>();
    for (const item of layout.items) if (item.name !== null) names.add(item.name);
    const near = nearest(asked, names);
    const hidden = layout.undrawn.find(({ name: other }) => other === asked.trim());
    if (hidden !== undefined) {
      refuse(
        sheet,
        ['outline'],
        `outline: ${quote(asked)} is in the drawing but is not drawn: ${hidden.why}`,
      );
    }
    refuse(
      sheet,
      ['outline'],
      `outline: the drawing has no shape ${quote(asked)}${near === null ? '' : `; did you mean ${quote(near)}?`}`,
    );
  }
  const rings = outerRings(items.flatMap(ringsOf));
  const sides = sidesOf(items, rings);
  if (sides === null || sides[1] <= 0) {
    const what = `the shape ${quote(name)} does not close; draw the chip edge as one closed shape`;
    if (sheet !== null && asked !== null) refuse(sheet, ['outline'], `outline: ${what}`);
    throw new InputError(file, what);
  }
  return { name, ordinals: new Set(items.map(({ ordinal }) => ordinal)), rings, sides };
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

function ringsOf(item: LayoutItem): readonly Float64Array[] {
  switch (item.kind) {
    case 'stroke':
      return item.centrelines.filter(closes).map(({ points }) => closed(points));
    case 'outline':
    case 'ignored':
      return item.rings.filter((ring) => ring.length >= 6).map(closed);
    case 'hole': {
      const ring = new Float64Array(2 * CIRCLE_CORNERS + 2);
      for (let i = 0; i <= CIRCLE_CORNERS; i++) {
        const angle = (2 * Math.PI * (i % CIRCLE_CORNERS)) / CIRCLE_CORNERS;
        ring[2 * i] = item.x + item.radius * Math.cos(angle);
        ring[2 * i + 1] = item.y + item.radius * Math.sin(angle);
      }
      return [ring];
    }
    default:
      return item satisfies never;
  }
}

/** Closed, or open by less than a hundredth of the way from its first point to its farthest corner. */
function closes({ points, closed: isClosed }: Centreline): boolean {
  if (points.length < 6) return false;
  if (isClosed) return true;
  const n = points.length;
  const [x, y] = [points[0]!, points[1]!];
  let reach = 0;
  for (let i = 2; i < n; i += 2) reach = Math.max(reach, Math.hypot(points[i]! - x, points[i + 1]! - y));
  return Math.hypot(points[n - 2]! - x, points[n - 1]! - y) < 0.01 * reach;
}

function closed(points: Float64Array): Float64Array {
  const n = points.length;
  if (points[0] === points[n - 2] && points[1] === points[n - 1]) return points;
  const ring = new Float64Array(n + 2);
  ring.set(points);
  ring[n] = points[0]!;
  ring[n + 1] = points[1]!;
  return ring;
}

function sidesOf(
  items: readonly LayoutItem[],
  rings: readonly Float64Array[],
): readonly [number, number] | null {
  const only = items[0];
  if (items.length === 1 && only?.kind === 'hole') return [2 * only.radius, 2 * only.radius];
  const points = new Float64Array(rings.reduce((sum, ring) => sum + ring.length, 0));
  let at = 0;
  for (const ring of rings) {
    points.set(ring, at);
    at += ring.length;
  }
  const rectangle = smallestRectangle(points);
  return rectangle === null ? null : [rectangle.longSide, rectangle.shortSide];
}
