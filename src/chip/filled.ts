/**
 * Drawn areas that are no centrelines, told apart: outlines of channels (a fault), obstacles in a channel, and the rest.
 *
 * A channel is a stroke along its middle. What CAD programs export are fills, or hairlines round what would be etched: read as
 * if they were channels, or passed over, they would give a wrong network without a word.
 */
import { Bounds } from '../geometry/bounds.ts';
import { indexBoxes } from '../geometry/box-index.ts';
import { addDiscStretch, coveredUpTo, lineTo } from '../geometry/strip.ts';
import type { Hole, Ignored, Outline } from '../layout/types.ts';
import { findHairlines } from './hairlines.ts';
import { circleRing, closedRing, indexRings, outerRings } from './rings.ts';
import { indexStrips, type StripIndex, widestOf } from './strip-index.ts';
import type { Channel, Obstacle, OutlineFault, OutlineReason, Port } from './types.ts';

/** Everything drawn that encloses an area and is neither channel nor port. */
export interface DrawnAreas {
  readonly outlines: readonly Outline[];
  /** Circles of no port size. */
  readonly unsuitable: readonly Hole[];
  /** Circles outside the ports layer. */
  readonly outside: readonly Hole[];
  /** Unfilled, and not round. */
  readonly ellipses: readonly Ignored[];
}

export interface AreaReading {
  readonly faults: readonly OutlineFault[];
  readonly obstacles: readonly Obstacle[];
  /** Without the hairlines that are outlines. */
  readonly channels: readonly Channel[];
  /** What is only counted, by kind, each as often as it was met. */
  readonly counted: readonly string[];
}

/**
 * A filled shape is a fault when it is stroked too, or when a channel end or a port touches it or lies on it; all that is
 * drawn is one in a drawing without channels. A shape that lies in the etched area of a channel can't be one: it is an
 * obstacle there. One that holds every channel and port is background.
 *
 * An end touches a shape when the shape's edge is within half the channel's width of it, or when it lies inside. An end in a
 * well is the port's, and touches no shape; a shape that lies in a well is decoration of the port.
 * Cost: n log n in the corners of shapes and channels.
 */
export function readAreas(
  areas: DrawnAreas,
  unitMm: number,
  drawn: readonly Channel[],
  ports: readonly Port[],
  slackMm: number,
): AreaReading {
  const hairlines = findHairlines(drawn, ports, slackMm);
  const channels = hairlines.size === 0 ? drawn : drawn.filter((channel) => !hairlines.has(channel));
  const faults = [...hairlines].map(([{ name, centrelines }, held]): OutlineFault => {
    const [xMm, yMm] = centrelines[0].points;
    const on = held.map((port) => port.name);
    return { kind: 'filled-outline', name, xMm, yMm, reason: 'hairline', ports: on, ends: [] };
  });
  const wells = indexWells(ports, slackMm);
  const shapes = toShapes(areas, unitMm, wells);
  if (shapes.length === 0) return { faults, obstacles: [], channels, counted: [] };

  const etched: Etched = { channels, ports, strips: indexStrips(channels, slackMm), wells, slackMm };
  const touching = touchedShapes(shapes, etched);
  const isBackground = backgroundTest(etched);
  const obstacles: Obstacle[] = [];
  const counted: string[] = [];
  for (const [i, shape] of shapes.entries()) {
    const found = judge(shape, touching[i]);
    if (found === 'counted') counted.push(shape.kind);
    else if (found.kind === 'obstacle') obstacles.push(found.obstacle);
    else {
      const { name, rings } = shape;
      const [xMm, yMm] = [rings[0]?.[0] ?? Number.NaN, rings[0]?.[1] ?? Number.NaN];
      const { ports: on, ends } = touching[i];
      faults.push({ kind: 'filled-outline', name, xMm, yMm, reason: found.reason, ports: on, ends });
    }
  }
  return { faults, obstacles, channels, counted };

  function judge(shape: Shape, { ends, ports: on, inWell }: Touch): Judgement {
    if (shape.dataChannel) return { kind: 'fault', reason: 'no-stroke' };
    if (inWell) return 'counted';
    if (channels.length === 0)
      return shape.mayBeChannel ? { kind: 'fault', reason: 'no-channels' } : 'counted';
    if (isBackground(shape)) return 'counted';
    const within = whereInStrips(shape, etched);
    if (within?.inside === true && !shape.isPad) return toObstacle(shape, within);
    if (!shape.filled) return 'counted';
    if (shape.stroked && shape.mayBeChannel) return { kind: 'fault', reason: 'stroked' };
    if (ends.length > 0) return { kind: 'fault', reason: 'end' };
    if (on.length > 0 && shape.mayBeChannel) return { kind: 'fault', reason: 'port' };
    return within === null || shape.isPad ? 'counted' : toObstacle(shape, within);
  }
}

type Judgement =
  | 'counted'
  | { readonly kind: 'fault'; readonly reason: OutlineReason }
  | { readonly kind: 'obstacle'; readonly obstacle: Obstacle };

interface Shape {
  readonly ordinal: number;
  readonly name: string;
  /** mm, first point repeated at the end */
  readonly rings: readonly Float64Array[];
  readonly filled: boolean;
  readonly stroked: boolean;
  readonly dataChannel: boolean;
  /** It may be an outline by itself; a circle outside the ports layer only where a channel ends on it. */
  readonly mayBeChannel: boolean;
  /** A circle round a port. */
  readonly isPad: boolean;
  readonly circle: Obstacle['circle'];
  /** Key in the count of ignored shapes. */
  readonly kind: string;
}

/** What most shapes are. */
const PLAIN = {
  filled: true,
  stroked: true,
  dataChannel: false,
  mayBeChannel: true,
  isPad: false,
  circle: null,
};

function toShapes(
  { outlines, unsuitable, outside, ellipses }: DrawnAreas,
  unitMm: number,
  wells: Wells,
): Shape[] {
  const toMm = (ring: Float64Array): Float64Array => closedRing(ring).map((value) => value * unitMm);
  // A fill closes what it fills.
  const common = ({ ordinal, name, rings }: Outline | Ignored, what: string) => ({
    ...PLAIN,
    ordinal,
    name: name ?? `unnamed ${what}`,
    rings: rings.map(toMm),
  });
  const fills = outlines.map((outline): Shape => {
    const { stroked, dataChannel } = outline;
    return { ...common(outline, 'shape'), stroked, dataChannel, kind: 'filled outline' };
  });
  const ovals = ellipses.map(
    (oval): Shape => ({
      ...common(oval, 'ellipse'),
      filled: false,
      mayBeChannel: false,
      kind: oval.reason,
    }),
  );
  const circles = unsuitable.map((circle) => circleShape(circle, unitMm, 'circle of no port size'));
  const others = outside.map((circle): Shape => {
    const shape = circleShape(circle, unitMm, 'circle outside the ports layer');
    const isPad = wells
      .at(circle.x * unitMm, circle.y * unitMm)
      .some((port) => isConcentric(circle, unitMm, port));
    return { ...shape, mayBeChannel: false, isPad };
  });
  return [...fills, ...ovals, ...circles, ...others].sort((a, b) => a.ordinal - b.ordinal);
}

function isConcentric({ x, y }: Hole, unitMm: number, { xMm, yMm, radiusMm }: Port): boolean {
  return Math.hypot(x * unitMm - xMm, y * unitMm - yMm) <= 0.01 * radiusMm;
}

function circleShape(circle: Hole, unitMm: number, kind: string): Shape {
  const [xMm, yMm, radiusMm] = [circle.x * unitMm, circle.y * unitMm, circle.radius * unitMm];
  return {
    ...PLAIN,
    ordinal: circle.ordinal,
    name: circle.name ?? 'unnamed circle',
    rings: [circleRing(xMm, yMm, radiusMm)],
    filled: circle.filled,
    stroked: circle.stroked,
    mayBeChannel: circle.filled,
    circle: { xMm, yMm, radiusMm },
    kind,
  };
}

/** What of the chip comes to a shape. */
interface Touch {
  readonly ends: OutlineFault['ends'][number][];
  /** Names of ports that touch it or lie on it. */
  readonly ports: string[];
  /** It lies wholly in a port's well: decoration of the port. */
  inWell: boolean;
}

/** All that is etched, with the slack of every "on" and "inside". */
interface Etched {
  readonly channels: readonly Channel[];
  readonly ports: readonly Port[];
  readonly strips: StripIndex;
  readonly wells: Wells;
  readonly slackMm: number;
}

function touchedShapes(
  shapes: readonly Shape[],
  { channels, ports, wells, slackMm }: Etched,
): readonly Touch[] {
  const touching: Touch[] = shapes.map(({ rings, circle }) => {
    const [x, y] = circle === null ? [rings[0]?.[0] ?? 0, rings[0]?.[1] ?? 0] : [circle.xMm, circle.yMm];
    const inWell = wells.at(x, y).some((port) => isInsideWell(rings, port, slackMm));
    return { ends: [], ports: [], inWell };
  });
  const index = indexRings(shapes.map(({ rings }) => rings));
  const shapesAt = (x: number, y: number, reach: number): ReadonlySet<number> =>
    new Set([...index.groupsWithin(x, y, reach + slackMm), ...index.groupsRound(x, y)]);
  const touchAt = ({ name, stripHalfWidthMm }: Channel, x: number, y: number): void => {
    if (wells.at(x, y).length > 0) return;
    for (const shape of shapesAt(x, y, stripHalfWidthMm))
      touching[shape].ends.push({ channel: name, xMm: x, yMm: y });
  };
  for (const channel of channels) {
    for (const { points, closed } of channel.centrelines) {
      if (closed) continue;
      for (const [x, y] of [points.subarray(0, 2), points.subarray(-2)]) touchAt(channel, x, y);
    }
  }
  for (const { name, xMm, yMm, radiusMm } of ports) {
    for (const shape of shapesAt(xMm, yMm, radiusMm)) touching[shape].ports.push(name);
  }
  return touching;
}

interface Wells {
  /** Ports whose well holds the point. */
  readonly at: (x: number, y: number) => readonly Port[];
  /** Ports whose well may meet the line. */
  readonly along: (x1: number, y1: number, x2: number, y2: number) => readonly Port[];
}

function indexWells(ports: readonly Port[], slackMm: number): Wells {
  const index = indexBoxes(
    ports.flatMap(({ xMm, yMm, radiusMm }) => {
      const r = radiusMm + slackMm;
      return [xMm - r, yMm - r, xMm + r, yMm + r];
    }),
  );
  const along: Wells['along'] = (x1, y1, x2, y2) =>
    index.search(Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2)).map((i) => ports[i]);
  return {
    at: (x, y) =>
      along(x, y, x, y).filter(
        ({ xMm, yMm, radiusMm }) => Math.hypot(x - xMm, y - yMm) <= radiusMm + slackMm,
      ),
    along,
  };
}

function isInsideWell(
  rings: readonly Float64Array[],
  { xMm, yMm, radiusMm }: Port,
  slackMm: number,
): boolean {
  return rings.every((ring) =>
    everyPoint(ring, (x, y) => Math.hypot(x - xMm, y - yMm) <= radiusMm + slackMm),
  );
}

/** Whether a shape, its holes filled, holds every centreline and every port's middle; touching its edge is inside. */
function backgroundTest({ channels, ports, slackMm }: Etched): (shape: Shape) => boolean {
  const lines = channels.flatMap(({ centrelines }) => centrelines.map(({ points }) => points));
  const places = [...lines, ...ports.map(({ xMm, yMm }) => Float64Array.of(xMm, yMm))];
  const needed = boundsOf(places);
  return ({ rings, filled }) => {
    if (!filled) return false;
    const own = boundsOf(rings);
    const isRound =
      own.left <= needed.left + slackMm &&
      own.right >= needed.right - slackMm &&
      own.top <= needed.top + slackMm &&
      own.bottom >= needed.bottom - slackMm;
    if (!isRound) return false;
    const index = indexRings([outerRings(rings)]);
    const holds = (x: number, y: number): boolean =>
      index.contains(x, y) || index.groupsWithin(x, y, slackMm).length > 0;
    return places.every((points) => everyPoint(points, holds));
  };
}

function boundsOf(lines: readonly Float64Array[]): Bounds {
  const bounds = new Bounds();
  for (const points of lines) bounds.addLine(points);
  return bounds;
}

function everyPoint(points: Float64Array, test: (x: number, y: number) => boolean): boolean {
  for (let i = 0; i < points.length; i += 2) if (!test(points[i], points[i + 1])) return false;
  return true;
}

interface Place {
  /** Index of the channel. */
  readonly channel: number;
  /** All of the shape lies in the etched area and the wells; else it lies across a wall of it. */
  readonly inside: boolean;
}

/** Where in the etched area a shape lies; null when it lies in none. */
function whereInStrips({ circle, rings }: Shape, etched: Etched): Place | null {
  const { strips, channels } = etched;
  if (circle !== null) {
    const round = strips.channelsRoundDisc(circle.xMm, circle.yMm, circle.radiusMm);
    if (round.length > 0) return { channel: widestOf(channels, round), inside: true };
  }
  const corners = isAllEtched(rings, etched) ? cornersIn(rings, strips) : null;
  if (corners !== null && corners.size > 0) {
    const most = Math.max(...corners.values());
    const best = [...corners].filter(([, held]) => held === most).map(([channel]) => channel);
    return { channel: widestOf(channels, best), inside: true };
  }
  const met = new Set(
    rings.flatMap((ring) => sidesOf(ring).flatMap((side) => strips.channelsAlong(...side))),
  );
  return met.size === 0 ? null : { channel: widestOf(channels, [...met]), inside: false };
}

/** How many corners of a shape lie in each channel. */
function cornersIn(rings: readonly Float64Array[], strips: StripIndex): ReadonlyMap<number, number> {
  const corners = new Map<number, number>();
  for (const [x, y] of rings.flatMap(sidesOf)) {
    for (const channel of strips.channelsAt(x, y)) corners.set(channel, (corners.get(channel) ?? 0) + 1);
  }
  return corners;
}

/** The straight sides of a ring. */
function sidesOf(ring: Float64Array): readonly Side[] {
  const sides: Side[] = [];
  for (let i = 0; i + 3 < ring.length; i += 2) sides.push([ring[i], ring[i + 1], ring[i + 2], ring[i + 3]]);
  return sides;
}

type Side = readonly [x1: number, y1: number, x2: number, y2: number];

/** Looked at in each direction across a shape for material within. */
const LOOKS = 6;

/** Whether the edges of a shape, and what lies between them, are all in strips and wells. */
function isAllEtched(rings: readonly Float64Array[], etched: Etched): boolean {
  const { strips, wells } = etched;
  const sides = rings.flatMap(sidesOf);
  if (!sides.every((side) => isEdgeEtched(side, etched))) return false;
  const { left, top, right, bottom } = boundsOf(rings);
  // Edges along a loop of channels may enclose the material that it goes round.
  const area = indexRings([rings]);
  for (let i = 0; i < LOOKS; i++) {
    for (let k = 0; k < LOOKS; k++) {
      const x = left + ((i + 0.5) / LOOKS) * (right - left);
      const y = top + ((k + 0.5) / LOOKS) * (bottom - top);
      if (!area.contains(x, y)) continue;
      if (strips.channelsAt(x, y).length === 0 && wells.at(x, y).length === 0) return false;
    }
  }
  return true;
}

function isEdgeEtched(side: Side, { strips, wells, slackMm }: Etched): boolean {
  const line = lineTo(...side);
  if (line.span === 0) return true;
  const stretches: number[] = [];
  strips.addStretches(stretches, ...side);
  for (const { xMm, yMm, radiusMm } of wells.along(...side)) {
    addDiscStretch(stretches, xMm, yMm, radiusMm + slackMm, line);
  }
  return coveredUpTo(stretches, 0, slackMm) >= line.span - slackMm;
}

function toObstacle({ name, ordinal, rings, circle }: Shape, { channel, inside }: Place): Judgement {
  return { kind: 'obstacle', obstacle: { name, ordinal, channel, inside, rings, circle } };
}
