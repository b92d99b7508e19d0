import type { Network } from '../network/types.ts';
import { closestPoints } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { gapOfEnds, gapOfEndToHole, gapToEnd, gapToHole, type PaintedEnd, paintedEnd } from './painted.ts';
import { byPair, pairKey } from './pairs.ts';
import { channelPaths, routeLength } from './paths.ts';
import { isAbove, isBelow } from './rule.ts';
import type { ThinWall } from './thin.ts';

/** An open end that just misses a strip or a well. */
export interface NearMiss {
  /** 2·centreline, + 1 at the last point. */
  readonly end: number;
  readonly centreline: number;
  /** Centreline that it misses, −1 when it is a well. */
  readonly missed: number;
  /** Port that it misses, −1 when it is a channel. */
  readonly port: number;
  /** The other channel's open end, when it is that which is missed; −1 otherwise. */
  readonly missedEnd: number;
  /** Between painted strokes, mm; 0 where they touch. */
  readonly gapMm: number;
  readonly limitMm: number;
  /** From the centreline's end point to the painted stroke or rim, mm. */
  readonly reachMm: number;
  readonly pointsAtIt: boolean;
  readonly mark: readonly [number, number, number, number];
}

/** All near misses, at most one for each open end; two open ends that miss each other are one. */
export const nearMisses: (context: FindingContext) => readonly NearMiss[] = oncePerContext((context) => {
  const misses: NearMiss[] = [];
  const byEnd = new Map<number, NearMiss>();
  for (const end of openEnds(context.network)) {
    const miss = findMiss(context, end);
    if (miss === null) continue;
    const mutual = byEnd.get(miss.missedEnd);
    if (mutual !== undefined && mutual.missedEnd === end) {
      if (miss.pointsAtIt && !mutual.pointsAtIt) misses[misses.indexOf(mutual)] = miss;
      continue;
    }
    byEnd.set(end, miss);
    misses.push(miss);
  }
  return misses;
});

/** Ends of channels that meet no port and no channel. */
export function openEnds({ trace }: Network): number[] {
  const ends: number[] = [];
  trace.endFate.forEach((fate, end) => {
    if (fate === 'open') ends.push(end);
  });
  return ends;
}

/** Place of an end and unit direction out of its channel. */
export function endPlace({ trace }: Network, end: number) {
  const { pieces } = trace.near;
  const c = end >> 1;
  const atStart = (end & 1) === 0;
  const piece = atStart ? pieces.firstPiece[c] : pieces.firstPiece[c + 1] - 1;
  const sign = atStart ? -1 : 1;
  return {
    piece,
    x: atStart ? pieces.x1[piece] : pieces.x2[piece],
    y: atStart ? pieces.y1[piece] : pieces.y2[piece],
    outX: (sign * (pieces.x2[piece] - pieces.x1[piece])) / pieces.length[piece],
    outY: (sign * (pieces.y2[piece] - pieces.y1[piece])) / pieces.length[piece],
    s: atStart ? 0 : pieces.centrelineLength[c],
  };
}

export function paintedEndOf(network: Network, end: number): PaintedEnd {
  const { chip, trace } = network;
  const { pieces } = trace.near;
  const place = endPlace(network, end);
  return paintedEnd(
    place.x,
    place.y,
    place.outX,
    place.outY,
    pieces.half[place.piece],
    chip.channels[pieces.channel[place.piece]].linecap,
  );
}

/** Whether a thin wall is nothing but the near miss itself: all of it lies at the end that misses. */
export function replacesWall(context: FindingContext, wall: ThinWall): boolean {
  const { network } = context;
  const { pieces } = network.trace.near;
  return (missesByPair(context).get(pairKey(wall.centrelineA, wall.centrelineB)) ?? []).some((miss) => {
    if (wall.gapMm <= 0 && !miss.pointsAtIt) return false;
    return (
      isAtEnd(miss.centreline, miss.end, miss.missed) ||
      (miss.missedEnd >= 0 && isAtEnd(miss.missed, miss.missedEnd, miss.centreline))
    );

    function isAtEnd(own: number, end: number, other: number): boolean {
      const onA = wall.centrelineA === own && wall.centrelineB === other;
      const onB = wall.centrelineB === own && wall.centrelineA === other;
      if (!onA && !onB) return false;
      const { s, piece } = endPlace(network, end);
      const near = 2 * pieces.half[piece] + miss.limitMm;
      const within = (from: number, to: number): boolean =>
        Math.max(Math.abs(from - s), Math.abs(to - s)) <= near;
      return (onA && within(wall.fromA, wall.toA)) || (onB && within(wall.fromB, wall.toB));
    }
  });
}

const missesByPair = oncePerContext((context) =>
  byPair(
    nearMisses(context).filter(({ port }) => port < 0),
    ({ centreline }) => centreline,
    ({ missed }) => missed,
  ),
);

/** A miss is judged against at most this much of the channel's width. */
const MOST_WIDTH_MM = 0.5;

const COS_45 = Math.SQRT1_2;

function findMiss(context: FindingContext, end: number): NearMiss | null {
  const { chip, network } = context;
  const { near } = network.trace;
  const { pieces, index } = near;
  const c = end >> 1;
  const place = endPlace(network, end);
  const channel = chip.channels[pieces.channel[place.piece]];
  const half = pieces.half[place.piece];
  const minWall = chip.limits.minWallM(Number.isNaN(channel.depthMm) ? 0 : channel.depthMm / 1e3);
  const minWallMm = minWall === null ? 0 : minWall.value * 1e3;
  const limitMm = Math.max(minWallMm, Math.min(2 * half, MOST_WIDTH_MM));
  const painted = paintedEndOf(network, end);
  let best: NearMiss | null = null;

  const [ax, ay, bx, by] = painted.face;
  const around = limitMm + painted.radius;
  const found = index?.search(
    Math.min(ax, bx) - around,
    Math.min(ay, by) - around,
    Math.max(ax, bx) + around,
    Math.max(ay, by) + around,
    (i) => pieces.plane[i] === channel.plane && i !== place.piece,
  );
  for (const i of found ?? []) {
    const gap = gapToEnd(chip, pieces, i, painted);
    if (!isBelow(gap.distanceMm, limitMm)) continue;
    // Seen from the middle of the end, the nearest painted point says where it points and how far it must go.
    const aim = gapToHole(chip, pieces, i, { xMm: place.x, yMm: place.y, radiusMm: 0 });
    const onLine = closestPoints(
      [place.x, place.y, place.x, place.y],
      [pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]],
    );
    const t = pieces.start[i] + Math.hypot(onLine.x2 - pieces.x1[i], onLine.y2 - pieces.y1[i]);
    const target = aim.distanceMm > 1e-9 ? { x: aim.x1, y: aim.y1 } : { x: onLine.x2, y: onLine.y2 };
    const pointsAtIt = pointsAt(target.x, target.y);
    const apartMm = 4 * (half + pieces.half[i] + minWallMm);
    // What it leads to by a short way (its own last bend, its own junction) it does not miss, unless it points back at it.
    if (!pointsAtIt && isNearAlong(pieces.centreline[i], t, apartMm)) continue;
    consider({
      end,
      centreline: c,
      missed: pieces.centreline[i],
      port: -1,
      missedEnd: missedEndOf(i, gap.distanceMm),
      gapMm: Math.max(0, gap.distanceMm),
      limitMm,
      reachMm: Math.max(0, aim.distanceMm),
      pointsAtIt,
      mark: [gap.x1, gap.y1, gap.x2, gap.y2],
    });
  }
  for (const p of portsNear(context, place.x, place.y, limitMm + half * Math.SQRT2)) {
    const port = chip.ports[p];
    const gap = gapOfEndToHole(painted, port);
    if (!isBelow(gap.distanceMm, limitMm)) continue;
    const pointsAtIt = pointsAt(port.xMm, port.yMm);
    if (!pointsAtIt && isNearPort(p, 4 * (2 * half + minWallMm))) continue;
    consider({
      end,
      centreline: c,
      missed: -1,
      port: p,
      missedEnd: -1,
      gapMm: Math.max(0, gap.distanceMm),
      limitMm,
      reachMm: Math.max(0, Math.hypot(port.xMm - place.x, port.yMm - place.y) - port.radiusMm),
      pointsAtIt,
      mark: [gap.x1, gap.y1, gap.x2, gap.y2],
    });
  }
  return best;

  function consider(miss: NearMiss): void {
    if (
      best === null ||
      (miss.pointsAtIt && !best.pointsAtIt) ||
      (miss.pointsAtIt === best.pointsAtIt && miss.gapMm < best.gapMm)
    ) {
      best = miss;
    }
  }

  function pointsAt(x: number, y: number): boolean {
    const dx = x - place.x;
    const dy = y - place.y;
    const distance = Math.hypot(dx, dy);
    return distance === 0 || !isAbove(COS_45 * distance, dx * place.outX + dy * place.outY + 1e-12);
  }

  function isNearAlong(other: number, t: number, apartMm: number): boolean {
    const paths = channelPaths(context);
    const arcA = paths.arcAt(c, place.s);
    const arcB = paths.arcAt(other, t);
    if (arcA < 0 || arcB < 0) return false;
    return paths.routes(arcA, arcB, apartMm).some((route) => routeLength(route, place.s, t) <= apartMm);
  }

  function isNearPort(p: number, apartMm: number): boolean {
    const paths = channelPaths(context);
    const arc = paths.arcAt(c, place.s);
    if (arc < 0) return true;
    const { arcFrom, arcTo } = network.trace;
    const node = network.portNode[p];
    return (
      Math.min(
        paths.between(node, paths.sideVertex[2 * arc], apartMm) + Math.abs(place.s - arcFrom[arc]),
        paths.between(node, paths.sideVertex[2 * arc + 1], apartMm) + Math.abs(place.s - arcTo[arc]),
      ) <= apartMm
    );
  }

  /** The open end of the missed centreline, when it is its painted end that is nearest. */
  function missedEndOf(i: number, gapMm: number): number {
    const other = pieces.centreline[i];
    for (const e of [2 * other, 2 * other + 1]) {
      if (network.trace.endFate[e] !== 'open' || endPlace(network, e).piece !== i) continue;
      if (gapOfEnds(painted, paintedEndOf(network, e)).distanceMm <= gapMm + 1e-9) return e;
    }
    return -1;
  }
}

/** Ports whose rim comes within a distance of a point: a sweep over the ports sorted by x. */
export function portsNear(context: FindingContext, x: number, y: number, withinMm: number): number[] {
  const { order, largest } = portsByX(context);
  const { ports } = context.chip;
  const reach = withinMm + largest;
  let low = 0;
  let high = order.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ports[order[middle]].xMm < x - reach) low = middle + 1;
    else high = middle;
  }
  const found: number[] = [];
  for (let k = low; k < order.length && ports[order[k]].xMm <= x + reach; k++) {
    const port = ports[order[k]];
    if (Math.hypot(port.xMm - x, port.yMm - y) - port.radiusMm <= withinMm) found.push(order[k]);
  }
  return found;
}

const portsByX = oncePerContext(({ chip }) => ({
  order: chip.ports.map((_, p) => p).sort((p, q) => chip.ports[p].xMm - chip.ports[q].xMm || p - q),
  largest: chip.ports.reduce((most, { radiusMm }) => Math.max(most, radiusMm), 0),
}));
