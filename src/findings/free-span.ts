/**
 * The widest span of a roof that pillars help to carry: the diameter of the largest circle that fits between the walls of a
 * channel, the pillars in it and the rims of its wells, where the roof ends.
 *
 * The room at a point (to the nearest wall or pillar) changes by no more than the way from there, so a square cell can hold no
 * circle wider than that at its middle by more than its diagonal. Cells are halved, the most promising first, until none can
 * hold a circle that is wider by PRECISION (the branch and bound of general-purpose pole-of-inaccessibility searches).
 * Ends are open: a circle's middle may lie on an end, but not beyond; a cell's middle that does counts where it is nearest.
 * Cost: about the number of pillars times the logarithm of the precision.
 */
import FlatQueue from 'flatqueue';
import { indexRings } from '../chip/rings.ts';
import type { Channel, Obstacle } from '../chip/types.ts';
import { indexBoxes } from '../geometry/box-index.ts';
import { distanceToSegment } from '../geometry/segment.ts';
import type { Centreline } from '../layout/types.ts';
import { boxRound, type Line, linesAlong, type Place } from './closest.ts';

type Circle = NonNullable<Obstacle['circle']>;

/** Share of the channel's width within which the span is found. */
const PRECISION = 1e-3;

/** Cells looked at before the bound itself is given: safe, for it can only be too wide. */
const MOST_CELLS = 300_000;

/** The widest span and the middle of its circle. */
export interface FreeSpan extends Place {
  /** At most the channel's width. */
  readonly spanMm: number;
}

export function freeSpan(
  { centrelines, drawnWidthMm }: Channel,
  pillars: readonly Obstacle[],
  wells: readonly Circle[] = [],
): FreeSpan {
  const half = drawnWidthMm / 2;
  const toPillar = distanceToPillars(pillars, wells);
  const nearest = nearestInStrip(centrelines);
  let best = 0;
  let [xMm, yMm] = [Number.NaN, Number.NaN];
  /** Room at the point, or at the one nearest to it that is not beyond an open end. Keeps the best. */
  const roomAt = (x: number, y: number): number => {
    // A first cell reaches 2√2 halves of the width from its middle.
    const place = nearest(x, y, 4 * half);
    if (place === null) return -Infinity;
    const toWall = half - place.distance;
    if (toWall <= 0) return toWall;
    const room = Math.min(toWall, toPillar(place.x, place.y, toWall));
    if (room > best) {
      best = room;
      [xMm, yMm] = [place.x, place.y];
    }
    return room;
  };
  // the largest bound first
  const heap = new FlatQueue<Cell>();
  for (const { points } of centrelines) {
    // Cells as wide as the channel along the centreline hold every point within half of it.
    for (const [x1, y1, x2, y2] of linesAlong(points)) {
      const count = Math.max(1, Math.ceil(Math.hypot(x2 - x1, y2 - y1) / drawnWidthMm));
      for (let k = 0; k < count; k++) {
        const t = (k + 0.5) / count;
        // A square round the middle of the stretch that holds it and half a width to every side, however it is turned.
        add(x1 + t * (x2 - x1), y1 + t * (y2 - y1), drawnWidthMm);
      }
    }
  }
  let looked = 0;
  for (let cell = heap.pop(); cell !== undefined; cell = heap.pop()) {
    if (cell.bound <= best + (PRECISION * drawnWidthMm) / 2) break;
    if (++looked > MOST_CELLS) return { spanMm: Math.min(drawnWidthMm, 2 * cell.bound), xMm, yMm };
    const quarter = cell.half / 2;
    for (const dx of [-quarter, quarter])
      for (const dy of [-quarter, quarter]) add(cell.x + dx, cell.y + dy, quarter);
  }
  return { spanMm: Math.min(drawnWidthMm, 2 * best), xMm, yMm };

  function add(x: number, y: number, halfSide: number): void {
    const room = roomAt(x, y);
    const bound = Math.min(half, room + halfSide * Math.SQRT2);
    if (bound > best + (PRECISION * drawnWidthMm) / 2) heap.push({ x, y, half: halfSide, bound }, -bound);
  }
}

/** Distance of a point to the nearest, at least when it is below `within`. */
type Distance = (x: number, y: number, within: number) => number;

interface Nearest {
  /** The point itself, or moved back on to the square end that it lies beyond. */
  readonly x: number;
  readonly y: number;
  /** From there to the centreline. */
  readonly distance: number;
}

function nearestInStrip(
  lines: readonly Centreline[],
): (x: number, y: number, within: number) => Nearest | null {
  const pieces = lines.flatMap(({ points, closed }) =>
    linesAlong(points).map((edge, i, { length }) => ({
      edge,
      startsOpen: !closed && i === 0,
      endsOpen: !closed && i === length - 1,
    })),
  );
  const near = edgesNear(pieces.map(({ edge }) => edge));
  return (x, y, within) => {
    let best: Nearest | null = null;
    for (const i of near(x, y, within)) {
      const one = nearestOnPiece(x, y, pieces[i]);
      if (best === null || one.distance < best.distance) best = one;
    }
    return best;
  };
}

/** A straight piece of a centreline, and whether its first or second point is an open end. */
interface StripPiece {
  readonly edge: Line;
  readonly startsOpen: boolean;
  readonly endsOpen: boolean;
}

function nearestOnPiece(x: number, y: number, { edge, startsOpen, endsOpen }: StripPiece): Nearest {
  const [x1, y1, x2, y2] = edge;
  const length = Math.hypot(x2 - x1, y2 - y1);
  const [ux, uy] = [(x2 - x1) / length, (y2 - y1) / length];
  const along = (x - x1) * ux + (y - y1) * uy;
  const across = Math.abs((y - y1) * ux - (x - x1) * uy);
  if (along < 0 && startsOpen) return { x: x - along * ux, y: y - along * uy, distance: across };
  const beyond = along - length;
  if (beyond > 0 && endsOpen) return { x: x - beyond * ux, y: y - beyond * uy, distance: across };
  return { x, y, distance: along < 0 || beyond > 0 ? Math.hypot(Math.max(-along, beyond), across) : across };
}

/** Negative inside a pillar, which is no room either. */
function distanceToPillars(pillars: readonly Obstacle[], wells: readonly Circle[]): Distance {
  const circles = [...pillars.flatMap(({ circle }) => circle ?? []), ...wells];
  const toShape = distanceToShapes(pillars.flatMap(({ circle, rings }) => (circle === null ? [rings] : [])));
  if (circles.length === 0) return toShape;
  const index = indexBoxes(
    circles.flatMap(({ xMm, yMm, radiusMm: r }) => [xMm - r, yMm - r, xMm + r, yMm + r]),
  );
  return (x, y, within) => {
    const least = toShape(x, y, within);
    // Most pillars are near: a window that grows finds the nearest without looking at all within.
    for (let reach = within / 16; ; reach = Math.min(within, 2 * reach)) {
      let nearest = least;
      for (const i of index.search(x - reach, y - reach, x + reach, y + reach)) {
        const { xMm, yMm, radiusMm } = circles[i];
        nearest = Math.min(nearest, Math.hypot(x - xMm, y - yMm) - radiusMm);
      }
      if (nearest <= reach || reach >= within) return nearest;
    }
  };
}

function distanceToShapes(shapes: readonly (readonly Float64Array[])[]): Distance {
  const edges = shapes.flatMap((rings) => rings.flatMap(linesAlong));
  const near = edgesNear(edges);
  const areas = indexRings(shapes);
  return (x, y, within) => {
    let nearest = Infinity;
    for (const i of near(x, y, within)) nearest = Math.min(nearest, distanceToSegment(x, y, ...edges[i]));
    return areas.groupsRound(x, y).length > 0 ? -Math.min(nearest, within) : nearest;
  };
}

function edgesNear(edges: readonly Line[]): (x: number, y: number, within: number) => readonly number[] {
  const index = indexBoxes(edges.flatMap((edge) => boxRound(edge, 0)));
  return (x, y, within) => index.search(x - within, y - within, x + within, y + within);
}

interface Cell {
  readonly x: number;
  readonly y: number;
  /** Half its side. */
  readonly half: number;
  /** No circle with its middle in the cell has a larger radius. */
  readonly bound: number;
}
