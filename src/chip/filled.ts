import Flatbush from 'flatbush';
import type { Hole, Outline } from '../layout/types.ts';
import { indexRings } from './rings.ts';
import type { Tally } from './select.ts';
import type { Channel, Port, ReadingFault } from './types.ts';

/**
 * Filled closed shapes: a fault when stroked too, or when a channel end touches one; else only counted.
 *
 * An end touches a shape when the shape's edge is within half the channel's width of it, or when it ends inside and its
 * other end lies outside. An end in a well touches nothing that lies inside that well: drawn decoration of a port.
 * @param circles circles that are no ports; unfilled ones are only counted
 */
export function findFilledOutlines(
  outlines: readonly Outline[],
  circles: readonly Hole[],
  unitMm: number,
  channels: readonly Channel[],
  ports: readonly Port[],
  joinWithinMm: number,
  ignored: Tally,
): readonly ReadingFault[] {
  const shapes: Shape[] = outlines.map((outline) => ({
    ordinal: outline.ordinal,
    name: outline.name ?? 'unnamed shape',
    rings: outline.rings.map((ring) => ring.map((value) => value * unitMm)),
    stroked: outline.stroked,
    kind: 'filled outline',
  }));
  const wellsAt = wellFinder(ports, joinWithinMm);
  for (const circle of circles) {
    const shape = filledCircle(circle, unitMm);
    // A dot in a well belongs to the port, as concentric circles do.
    const inWell = wellsAt(circle.x * unitMm, circle.y * unitMm).some((port) =>
      insideWell(shape, port, joinWithinMm),
    );
    if (circle.filled && !inWell) shapes.push(shape);
    else ignored.add(shape.kind);
  }
  if (shapes.length === 0) return [];
  shapes.sort((a, b) => a.ordinal - b.ordinal);
  const touched = touchedShapes(shapes, channels, wellsAt, joinWithinMm);
  const faults: ReadingFault[] = [];
  for (const [i, { name, rings, stroked, kind }] of shapes.entries()) {
    if (!stroked && !touched.has(i)) {
      ignored.add(kind);
      continue;
    }
    const [xMm, yMm] = [rings[0]?.[0] ?? Number.NaN, rings[0]?.[1] ?? Number.NaN];
    faults.push({ kind: 'filled-outline', name, xMm, yMm, stroked });
  }
  return faults;
}

interface Shape {
  readonly ordinal: number;
  readonly name: string;
  /** mm */
  readonly rings: readonly Float64Array[];
  readonly stroked: boolean;
  readonly kind: string;
}

function filledCircle(circle: Hole, unitMm: number): Shape {
  const corners = 128;
  const ring = new Float64Array(2 * corners);
  for (let i = 0; i < corners; i++) {
    const angle = (2 * Math.PI * i) / corners;
    ring[2 * i] = (circle.x + circle.radius * Math.cos(angle)) * unitMm;
    ring[2 * i + 1] = (circle.y + circle.radius * Math.sin(angle)) * unitMm;
  }
  return {
    ordinal: circle.ordinal,
    name: circle.name ?? 'unnamed circle',
    rings: [ring],
    stroked: circle.stroked,
    kind: 'circle of no port size',
  };
}

function touchedShapes(
  shapes: readonly Shape[],
  channels: readonly Channel[],
  wellsAt: WellsAt,
  joinWithinMm: number,
): ReadonlySet<number> {
  const touched = new Set<number>();
  const index = indexRings(shapes.map(({ rings }) => rings));
  const addTouched = (
    x: number,
    y: number,
    round: readonly number[],
    roundOther: readonly number[],
    reach: number,
  ): void => {
    const near = index.groupsWithin(x, y, reach);
    if (near.length === 0 && round.length === 0) return;
    const wells = wellsAt(x, y);
    for (const shape of near) {
      if (!wells.some((port) => insideWell(shapes[shape]!, port, joinWithinMm))) touched.add(shape);
    }
    if (wells.length > 0) return;
    for (const shape of round) if (!roundOther.includes(shape)) touched.add(shape);
  };
  for (const channel of channels) {
    const reach = channel.stripHalfWidthMm + joinWithinMm;
    for (const { points, closed } of channel.centrelines) {
      if (closed) continue;
      const n = points.length;
      const [x1, y1, x2, y2] = [points[0]!, points[1]!, points[n - 2]!, points[n - 1]!];
      const round1 = index.groupsRound(x1, y1);
      const round2 = index.groupsRound(x2, y2);
      addTouched(x1, y1, round1, round2, reach);
      addTouched(x2, y2, round2, round1, reach);
    }
  }
  return touched;
}

type WellsAt = (x: number, y: number) => readonly Port[];

function wellFinder(ports: readonly Port[], slackMm: number): WellsAt {
  if (ports.length === 0) return () => [];
  const index = new Flatbush(ports.length);
  for (const { xMm, yMm, radiusMm } of ports) {
    const r = radiusMm + slackMm;
    index.add(xMm - r, yMm - r, xMm + r, yMm + r);
  }
  index.finish();
  return (x, y) =>
    index
      .search(x, y, x, y)
      .map((i) => ports[i]!)
      .filter(({ xMm, yMm, radiusMm }) => Math.hypot(x - xMm, y - yMm) <= radiusMm + slackMm);
}

function insideWell({ rings }: Shape, { xMm, yMm, radiusMm }: Port, slackMm: number): boolean {
  return rings.every((ring) => {
    for (let i = 0; i < ring.length; i += 2) {
      if (Math.hypot(ring[i]! - xMm, ring[i + 1]! - yMm) > radiusMm + slackMm) return false;
    }
    return true;
  });
}
