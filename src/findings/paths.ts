import { grouped } from '../by-key.ts';
import { placeOn } from '../geometry/on-piece.ts';
import { pieceAt } from '../geometry/pieces.ts';
import { type Groups, itemsOf, toGroups } from '../groups.ts';
import type { Network } from '../network/types.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/**
 * Distances along the channels: how far the fluid has to go from one place on a centreline to another, over whatever
 * nodes join them. Open wells take no length.
 *
 * Vertices are the network's nodes and the places where two arcs of one reach go on in each other. Only short distances
 * are asked for, so each question is a search of a small neighbourhood (E. W. Dijkstra, Numer. Math. 1 (1959) 269), kept
 * for the next one.
 */
class ChannelPaths {
  private readonly network: Network;
  /** Vertex at each arc's start and end: 2a, 2a + 1. */
  readonly sideVertex: Int32Array;
  readonly vertexCount: number;
  /** Sides of vertices, as 2·arc + (1 at the arc's end). */
  private readonly sides: Groups;
  /** Places of wells on centrelines: indices of the trace's place columns. */
  private readonly wells: Groups;
  private readonly known = new Map<
    number,
    { readonly withinMm: number; readonly reached: Map<number, number> }
  >();

  constructor(network: Network) {
    this.network = network;
    const { trace, nodePort } = network;
    const { sideVertex, vertexCount } = toVertices(network);
    this.sideVertex = sideVertex;
    this.vertexCount = vertexCount;
    this.sides = toGroups(vertexCount, sideVertex);
    const { firstPlace, placeCentreline } = trace;
    const inWells = new Int32Array(placeCentreline.length).fill(-1);
    for (let node = 0; node < network.nodeCount; node++) {
      if (nodePort[node] < 0) continue;
      for (let k = firstPlace[node]; k < firstPlace[node + 1]; k++) inWells[k] = placeCentreline[k];
    }
    this.wells = toGroups(trace.near.pieces.centrelineCount, inWells);
  }

  /** Sides of arcs that come to a vertex. */
  sidesAt(vertex: number): Int32Array {
    return itemsOf(this.sides, vertex);
  }

  /** Whether position s of a centreline lies in an open well. */
  isInWell(centreline: number, s: number): boolean {
    const { placeFrom, placeTo } = this.network.trace;
    return itemsOf(this.wells, centreline).some((k) => s > placeFrom[k] && s < placeTo[k]);
  }

  /** The arc that holds position s, or the one nearest to it; −1 when the centreline has none (all of it open well). */
  arcAt(centreline: number, s: number): number {
    const { firstArc, arcFrom, arcTo } = this.network.trace;
    let low = firstArc[centreline];
    let high = firstArc[centreline + 1] - 1;
    if (high < low) return -1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (arcFrom[middle] <= s) low = middle;
      else high = middle - 1;
    }
    const nextArc = low + 1;
    if (s > arcTo[low] && nextArc < firstArc[centreline + 1] && arcFrom[nextArc] - s < s - arcTo[low]) {
      return nextArc;
    }
    return low;
  }

  /** Adds the positions of arc ends strictly between two positions of a centreline. */
  addBounds(into: number[], centreline: number, low: number, high: number): void {
    const { firstArc, arcFrom, arcTo } = this.network.trace;
    const start = this.arcAt(centreline, low);
    if (start < 0) return;
    for (let a = Math.max(firstArc[centreline], start - 1); a < firstArc[centreline + 1]; a++) {
      if (arcFrom[a] >= high) return;
      if (arcFrom[a] > low) into.push(arcFrom[a]);
      if (arcTo[a] > low && arcTo[a] < high) into.push(arcTo[a]);
    }
  }

  /** The ways from one arc to another, none longer than withinMm between the arcs' ends. */
  routes(arcA: number, arcB: number, withinMm: number): Route[] {
    const routes: Route[] = arcA === arcB ? [{ kind: 'along' }] : [];
    for (const leave of [2 * arcA, 2 * arcA + 1]) {
      for (const enter of [2 * arcB, 2 * arcB + 1]) {
        const [from, to] = [this.sideVertex[leave], this.sideVertex[enter]];
        const lengthMm = this.between(from, to, withinMm);
        if (lengthMm > withinMm) continue;
        const leaveAt = positionOf(this.network, leave);
        const enterAt = positionOf(this.network, enter);
        routes.push({ kind: 'over', leaveAt, enterAt, lengthMm, vertex: from === to ? from : -1 });
      }
    }
    return routes;
  }

  /** Shortest way between two vertices (mm); Infinity when it is longer than withinMm. */
  between(from: number, to: number, withinMm: number): number {
    if (from === to) return 0;
    let entry = this.known.get(from);
    if (entry === undefined || entry.withinMm < withinMm) {
      entry = { withinMm, reached: this.search(from, withinMm) };
      this.known.set(from, entry);
    }
    return entry.reached.get(to) ?? Number.POSITIVE_INFINITY;
  }

  private search(from: number, withinMm: number): Map<number, number> {
    const { arcFrom, arcTo } = this.network.trace;
    const settled = new Map<number, number>();
    const open = new Map<number, number>([[from, 0]]);
    while (open.size > 0 && settled.size < MOST_VERTICES) {
      let vertex = -1;
      let least = Number.POSITIVE_INFINITY;
      for (const [v, d] of open) {
        if (d < least) {
          vertex = v;
          least = d;
        }
      }
      open.delete(vertex);
      settled.set(vertex, least);
      for (const side of this.sidesAt(vertex)) {
        const arc = side >> 1;
        const other = this.sideVertex[side ^ 1];
        const distance = least + arcTo[arc] - arcFrom[arc];
        if (distance > withinMm || settled.has(other)) continue;
        if (distance < (open.get(other) ?? Number.POSITIVE_INFINITY)) open.set(other, distance);
      }
    }
    return settled;
  }
}

/**
 * A way between two arcs: along the arc itself, or over a node or several. The whole way from s to t is |s − t|, or
 * |s − leaveAt| + lengthMm + |t − enterAt|.
 */
export type Route =
  | { readonly kind: 'along' }
  | {
      readonly kind: 'over';
      readonly leaveAt: number;
      readonly enterAt: number;
      readonly lengthMm: number;
      /** The one vertex that the way goes over, −1 when it goes over several. */
      readonly vertex: number;
    };

export function routeLength(route: Route, s: number, t: number): number {
  return route.kind === 'along'
    ? Math.abs(s - t)
    : Math.abs(s - route.leaveAt) + route.lengthMm + Math.abs(t - route.enterAt);
}

export const channelPaths = oncePerContext(({ network }) => new ChannelPaths(network));

/** Sides of arcs at each place where two or more join outside wells. */
export function* joinsOf(context: FindingContext): Iterable<Int32Array> {
  const { nodeCount, nodePort } = context.network;
  const paths = channelPaths(context);
  for (let v = 0; v < paths.vertexCount; v++) {
    if (v < nodeCount && nodePort[v] >= 0) continue;
    const sides = paths.sidesAt(v);
    if (sides.length >= 2) yield sides;
  }
}

/** Point of a centreline at position s; beyond a drawn end straight on. Returns [x, y] in mm. */
export function pointOn({ trace }: Network, centreline: number, s: number): Point {
  const { pieces } = trace.near;
  const i = pieceAt(pieces, centreline, s);
  const { x, y } = placeOn(pieces, i, (s - pieces.start[i]) / pieces.length[i]);
  return [x, y];
}

/** A neighbourhood with more vertices than this within a few widths is no drawing that anyone could make; bounds the time. */
const MOST_VERTICES = 512;

/** Nodes, then one more vertex for each place where two arcs of one reach go on in each other. */
function toVertices(network: Network): { sideVertex: Int32Array; vertexCount: number } {
  const { trace } = network;
  const sideVertex = new Int32Array(2 * trace.arcCount);
  let vertexCount = network.nodeCount;
  for (let a = 0; a < trace.arcCount; a++) {
    sideVertex[2 * a] = trace.arcNodeFrom[a];
    sideVertex[2 * a + 1] = trace.arcNodeTo[a];
  }
  const loose = Array.from(sideVertex.keys()).filter((side) => sideVertex[side] < 0);
  for (const sides of grouped(loose, (side) => trace.arcReach[side >> 1]).values()) {
    const points = new Map(sides.map((side) => [side, sidePoint(network, side)]));
    for (const [side, point] of points) {
      points.delete(side);
      const partner = nearestOf(points, point);
      points.delete(partner);
      sideVertex[side] = vertexCount;
      if (partner >= 0) sideVertex[partner] = vertexCount;
      vertexCount++;
    }
  }
  return { sideVertex, vertexCount };
}

type Point = readonly [x: number, y: number];

/** The side that lies nearest to a place, of equals the first; −1 when there is none. */
function nearestOf(points: ReadonlyMap<number, Point>, [x, y]: Point): number {
  let nearest = -1;
  let least = Number.POSITIVE_INFINITY;
  for (const [side, [px, py]] of points) {
    const distance = Math.hypot(px - x, py - y);
    if (distance < least) {
      least = distance;
      nearest = side;
    }
  }
  return nearest;
}

/** Where an arc's start (even side) or end (odd side) lies. */
export function sidePoint(network: Network, side: number): Point {
  return pointOn(network, network.trace.arcCentreline[side >> 1], positionOf(network, side));
}

function positionOf({ trace }: Network, side: number): number {
  return (side & 1) === 0 ? trace.arcFrom[side >> 1] : trace.arcTo[side >> 1];
}

/** A position on a centreline, mm. */
export interface OnCentreline {
  readonly c: number;
  readonly s: number;
}

/** Whether the way along the channels from one place to another is within a length (mm). */
export function isNearAlong(context: FindingContext, a: OnCentreline, b: OnCentreline, mm: number): boolean {
  const paths = channelPaths(context);
  const arcA = paths.arcAt(a.c, a.s);
  const arcB = paths.arcAt(b.c, b.s);
  if (arcA < 0 || arcB < 0) return false;
  return paths.routes(arcA, arcB, mm).some((route) => routeLength(route, a.s, b.s) <= mm);
}

/** Whether the way along the channels from a place to a well is within a length (mm). */
export function isNearPort(
  context: FindingContext,
  { c, s }: OnCentreline,
  port: number,
  mm: number,
): boolean {
  const { network } = context;
  const paths = channelPaths(context);
  const arc = paths.arcAt(c, s);
  if (arc < 0) return true;
  const wayTo = (side: number): number =>
    paths.between(network.portNode[port], paths.sideVertex[side], mm) +
    Math.abs(s - positionOf(network, side));
  return Math.min(wayTo(2 * arc), wayTo(2 * arc + 1)) <= mm;
}
