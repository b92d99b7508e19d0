import Flatten from '@flatten-js/core';
import { isBelow } from '../asked/within.ts';
import { indexRings } from '../chip/rings.ts';
import type { ChipEdge } from '../chip/types.ts';
import { type BoxIndex, indexBoxes } from '../geometry/box-index.ts';
import { type Curve, FINE_MM, finePieces } from '../geometry/curve.ts';
import { segmentDistance } from '../geometry/segment.ts';
import {
  boxRound,
  type Closest,
  closestPoints,
  type Line,
  linesAlong,
  middleOf,
  nearer,
  type Place,
  pointLine,
} from './closest.ts';
import type { FindingContext } from './context.ts';
import { lineOf, paintedParts } from './painted.ts';

/** A channel or well beyond the chip edge, or nearer to it than the margin. */
export interface EdgeFault extends Place {
  readonly name: string;
  readonly isHole: boolean;
  /** From the painted area or rim to the chip edge, mm; below 0 by how far it lies beyond. */
  readonly gapMm: number;
  readonly mark: Line;
}

/** Rounding of coordinates, mm: what touches the edge is not beyond it. */
const ROUNDING_MM = 1e-9;

/**
 * Finds what lies beyond the chip edge or within a margin of it: one fault for each run of a channel and for each well.
 *
 * Cost: one index query per piece; only pieces that come near the edge are measured exactly. A piece that does not lies
 * wholly on the side on which it starts.
 */
export function findEdgeFaults(context: FindingContext, edge: ChipEdge, marginMm: number): EdgeFault[] {
  const { chip, network } = context;
  const { pieces } = network.trace.near;
  const outline = toOutline(edge.rings.map((ring, k) => fineRing(ring, edge.ringCurves?.[k] ?? null)));
  if (outline.sides.length === 0) return [];
  const faults: EdgeFault[] = [];
  // What lies along a curve at exactly the margin is not within it: its straight pieces may be, by so much.
  const edgeSlackMm = (edge.ringCurves ?? []).some((curves) => curves !== null) ? FINE_MM : 0;
  const slackOf = (i: number): number => edgeSlackMm + Math.min(FINE_MM, pieces.bulge[i]);

  for (const port of chip.ports) {
    const near = measure(outline, pointLine(port.xMm, port.yMm), port.radiusMm);
    if (isFault(near.gapMm + edgeSlackMm, marginMm)) faults.push({ ...near, name: port.name, isHole: true });
  }

  for (let c = 0; c < pieces.centrelineCount; c++) {
    const first = pieces.firstPiece[c];
    let inside = outline.contains(pieces.x1[first], pieces.y1[first]);
    let worst: Near | null = null;
    const { name } = chip.channels[pieces.centrelineChannel[c]];
    for (let i = first; i < pieces.firstPiece[c + 1]; i++) {
      let near: Near | null = null;
      const reach = pieces.half[i] * Math.SQRT2 + pieces.bulge[i];
      if (comesNear(outline, reach + marginMm, lineOf(pieces, i))) {
        near = nearOfPiece(i);
        inside = outline.contains(pieces.x2[i], pieces.y2[i]);
      } else if (!inside) {
        near = farOutside(i);
      }
      const isAtFault = near !== null && isFault(near.gapMm + slackOf(i), marginMm);
      if (near !== null && isAtFault) worst = worst === null ? near : worseOf(worst, near);
      // Two pieces that come near the edge and meet far from it are two places.
      if (worst !== null && !(isAtFault && (!inside || isFault(gapAtEnd(i) + slackOf(i), marginMm)))) {
        faults.push({ ...worst, name, isHole: false });
        worst = null;
      }
    }
    if (worst !== null) faults.push({ ...worst, name, isHole: false });
  }
  return faults;

  /** A piece wholly beyond the edge and far from it: judged by its farther end, so that a whole drawing there costs little. */
  function farOutside(i: number): Near {
    const half = pieces.half[i];
    const start = beyond(outline, pieces.x1[i], pieces.y1[i], half);
    const end = beyond(outline, pieces.x2[i], pieces.y2[i], half);
    if (Math.abs(start.gapMm - end.gapMm) > ROUNDING_MM) return worseOf(start, end);
    const { xMm, yMm } = middleOf(lineOf(pieces, i));
    return worseOf(start, { ...beyond(outline, xMm, yMm, half), isEven: true });
  }

  function gapAtEnd(i: number): number {
    return measure(outline, pointLine(pieces.x2[i], pieces.y2[i]), pieces.half[i]).gapMm;
  }

  /** Nearest to the edge, or farthest beyond it, over the parts of a piece's painted area. */
  function nearOfPiece(i: number): Near {
    return paintedParts(chip, pieces, i)
      .flatMap(({ lines, radius }) => lines.map((line) => measure(outline, line, radius)))
      .reduce(worseOf);
  }
}

/** The worse of two; of equals that along which the distance stays the same, so that its middle is the place. */
function worseOf(one: Near, two: Near): Near {
  if (Math.abs(two.gapMm - one.gapMm) <= ROUNDING_MM) return two.isEven && !one.isEven ? two : one;
  return two.gapMm < one.gapMm ? two : one;
}

function isFault(gapMm: number, marginMm: number): boolean {
  return marginMm > 0 ? isBelow(gapMm, marginMm) : gapMm < -ROUNDING_MM;
}

interface Near extends Omit<EdgeFault, 'name' | 'isHole'> {
  /** The distance is the same along the whole line; the place is its middle. */
  readonly isEven: boolean;
}

/** The ring with its curves cut so finely that the distance from them is exact to 0.1 µm. */
function fineRing(ring: Float64Array, curves: readonly (Curve | null)[] | null): Float64Array {
  if (curves === null) return ring;
  const points = [ring[0], ring[1]];
  for (let k = 0; 2 * k + 3 < ring.length; k++) {
    const curve = curves[k];
    const fine = curve ? finePieces(curve, FINE_MM) : [];
    for (const { x, y } of fine.slice(0, -1)) points.push(x, y);
    points.push(ring[2 * k + 2], ring[2 * k + 3]);
  }
  return Float64Array.from(points);
}

interface Outline {
  /** Whether a point lies inside, by the even-odd rule. */
  readonly contains: (x: number, y: number) => boolean;
  readonly sides: readonly Line[];
  /** Boxes of the sides. */
  readonly index: BoxIndex;
}

function toOutline(rings: readonly Float64Array[]): Outline {
  const sides = rings.flatMap(linesAlong).filter(([ax, ay, bx, by]) => ax !== bx || ay !== by);
  const index = indexBoxes(sides.flatMap((side) => boxRound(side, 0)));
  return { contains: indexRings([rings]).contains, sides, index };
}

/** The points of a line (or point) and the edge nearest to each other: the index leaves few sides to be measured. */
function nearestOnEdge({ index, sides }: Outline, line: Line): Closest {
  const [ax, ay, bx, by] = line;
  const [some] = index.neighbors((ax + bx) / 2, (ay + by) / 2, 1);
  const shape = toShape(line);
  const within = distanceOf(shape, sides[some]).distanceMm * (1 + 1e-9);
  let best: Closest | null = null;
  for (const k of index.search(...boxRound(line, within)).sort((p, q) => p - q)) {
    const distance = distanceOf(shape, sides[k]);
    best = best === null ? distance : nearer(best, distance);
  }
  return best ?? distanceOf(shape, sides[some]);
}

function toShape([ax, ay, bx, by]: Line): Flatten.Point | Flatten.Segment {
  const start = new Flatten.Point(ax, ay);
  return ax === bx && ay === by ? start : new Flatten.Segment(start, new Flatten.Point(bx, by));
}

/** From a shape to a side: the first point is the shape's. */
function distanceOf(shape: Flatten.Point | Flatten.Segment, [ax, ay, bx, by]: Line): Closest {
  const side = new Flatten.Segment(new Flatten.Point(ax, ay), new Flatten.Point(bx, by));
  const [distanceMm, { ps, pe }] = shape.distanceTo(side);
  return { distanceMm, x1: ps.x, y1: ps.y, x2: pe.x, y2: pe.y };
}

/** Whether a line comes within a distance of the edge. */
function comesNear({ index, sides }: Outline, withinMm: number, line: Line): boolean {
  return index
    .search(...boxRound(line, withinMm))
    .some((k) => segmentDistance(...line, ...sides[k]) <= withinMm);
}

/** Distance of all that lies within a radius of a line from the edge; below 0 by how far it reaches beyond. */
function measure(outline: Outline, line: Line, radius: number): Near {
  const [ax, ay, bx, by] = line;
  const start = signed(ax, ay);
  if (ax === bx && ay === by) return near(start, false);
  const end = signed(bx, by);
  const middle = signed((ax + bx) / 2, (ay + by) / 2);
  const isEven =
    Math.abs(start.gapMm - end.gapMm) <= ROUNDING_MM && Math.abs(start.gapMm - middle.gapMm) <= ROUNDING_MM;
  if (isEven) return near(middle, true);
  const worst = start.gapMm <= end.gapMm ? start : end;
  if (worst.gapMm < -ROUNDING_MM) return near(worst, false);
  // Both ends are inside: the nearest place may lie between them, or the line may leave the chip and come back.
  const { distanceMm, x1, y1, x2, y2 } = nearestOnEdge(outline, line);
  return near({ gapMm: distanceMm, x: x1, y: y1, edgeX: x2, edgeY: y2 }, false);

  function signed(x: number, y: number) {
    const { distanceMm: distance, x2: edgeX, y2: edgeY } = nearestOnEdge(outline, pointLine(x, y));
    return { gapMm: outline.contains(x, y) ? distance : -distance, x, y, edgeX, edgeY };
  }

  /** From the painted area (or its centre line, where that is beyond) to the nearest point of the edge. */
  function near({ gapMm, x, y, edgeX, edgeY }: ReturnType<typeof signed>, isEvenNear: boolean): Near {
    const share = gapMm > radius ? radius / gapMm : 0;
    const xMm = x + share * (edgeX - x);
    const yMm = y + share * (edgeY - y);
    return { gapMm: gapMm - radius, xMm, yMm, mark: [xMm, yMm, edgeX, edgeY], isEven: isEvenNear };
  }
}

/** At most this many sides of the edge are looked at for a point far beyond it: those whose boxes are nearest. */
const SIDES_TRIED = 32;

function beyond({ index, sides }: Outline, x: number, y: number, radius: number): Near {
  const tried = [0, ...index.neighbors(x, y, SIDES_TRIED)];
  const best = tried.map((k) => closestPoints(pointLine(x, y), sides[k])).reduce(nearer);
  return { gapMm: -best.distanceMm - radius, xMm: x, yMm: y, mark: [x, y, best.x2, best.y2], isEven: false };
}
