import { minWallMm } from '../chip/limits.ts';
import { distanceToSegment } from '../geometry/segment.ts';
import type { Network } from '../network/types.ts';
import { closestPoints, nearer } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { portsNear } from './near-ports.ts';
import { gapOfEnds, gapOfEndToHole, gapToEnd, gapToHole, type PaintedEnd, paintedEnd } from './painted.ts';
import { byPair, pairKey } from './pairs.ts';
import { isNearAlong, isNearPort, pointOn } from './paths.ts';
import { isAbove, isBelow } from './rule.ts';
import type { ThinWall } from './thin.ts';
import { endPlace, type Tip, tipOfEnd, tipsOf } from './tips.ts';

/** A tip that just misses a strip or a well. */
export interface NearMiss {
  readonly tip: Tip;
  /** The tip's first end: 2·centreline, + 1 at the last point. */
  readonly end: number;
  readonly centreline: number;
  /** Centreline that it misses, −1 when it is a well. */
  readonly missed: number;
  /** Port that it misses, −1 when it is a channel. */
  readonly port: number;
  /** The other channel's end at a tip, when it is that which is missed; −1 otherwise. */
  readonly missedEnd: number;
  /** Between painted strokes, mm; 0 where they touch. */
  readonly gapMm: number;
  readonly limitMm: number;
  /** From the centreline's end point to the painted stroke or rim, mm. */
  readonly reachMm: number;
  readonly pointsAtIt: boolean;
  readonly mark: readonly [number, number, number, number];
}

/** All near misses, at most one for each tip; two tips that miss each other are one. */
export const nearMisses: (context: FindingContext) => readonly NearMiss[] = oncePerContext((context) => {
  const misses: NearMiss[] = [];
  const byTip = new Map<number, NearMiss>();
  const tipAt = tipOfEnd(context);
  const missedTip = ({ missedEnd }: NearMiss): number => (missedEnd < 0 ? -1 : tipAt[missedEnd]);
  tipsOf(context).forEach((tip, t) => {
    const miss = findMiss(context, tip);
    if (miss === null) return;
    const mutual = byTip.get(missedTip(miss));
    if (mutual !== undefined && missedTip(mutual) === t) {
      if (miss.pointsAtIt && !mutual.pointsAtIt) misses[misses.indexOf(mutual)] = miss;
      return;
    }
    byTip.set(t, miss);
    misses.push(miss);
  });
  return misses;
});

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
    return miss.tip.ends.some(
      (end) =>
        isAtEnd(end >> 1, end, miss.missed) ||
        (miss.missedEnd >= 0 && isAtEnd(miss.missed, miss.missedEnd, end >> 1)),
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
    nearMisses(context)
      .filter(({ port }) => port < 0)
      .flatMap((miss) => miss.tip.ends.map((end) => ({ ...miss, centreline: end >> 1 }))),
    ({ centreline }) => centreline,
    ({ missed }) => missed,
  ),
);

/** A miss is judged against at most this much of the channel's width. */
const MOST_WIDTH_MM = 0.5;

const COS_45 = Math.SQRT1_2;

function findMiss(context: FindingContext, tip: Tip): NearMiss | null {
  const { chip, network } = context;
  const { near } = network.trace;
  const { pieces, index } = near;
  const [end] = tip.ends;
  const c = end >> 1;
  const places = tip.ends.map((member) => endPlace(network, member));
  const [place] = places;
  const own = new Set(places.map(({ piece }) => piece));
  const channel = chip.channels[pieces.channel[place.piece]];
  const half = pieces.half[place.piece];
  const wallMm = minWallMm(chip, channel.depthMm)?.value ?? 0;
  const limitMm = Math.max(wallMm, Math.min(2 * half, MOST_WIDTH_MM));
  // Of strokes that come from one side the widest paints the tip; those of a fan each paint their part.
  const painted = (tip.kind === 'end' ? [end] : tip.ends).map((member) => paintedEndOf(network, member));
  let best: NearMiss | null = null;

  const around = limitMm + half * Math.SQRT2 + half;
  const found = index.search(
    tip.x - around,
    tip.y - around,
    tip.x + around,
    tip.y + around,
    (i) => pieces.plane[i] === channel.plane && !own.has(i) && !leftOutPieces(context).has(i),
  );
  for (const i of found) {
    const gap = painted.map((face) => gapToEnd(chip, pieces, i, face)).reduce(nearer);
    if (!isBelow(gap.distanceMm, limitMm)) continue;
    // Seen from the middle of the end, the nearest painted point says where it points and how far it must go.
    const aim = gapToHole(chip, pieces, i, { xMm: tip.x, yMm: tip.y, radiusMm: 0 });
    const onLine = closestPoints(
      [tip.x, tip.y, tip.x, tip.y],
      [pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]],
    );
    const t = pieces.start[i] + Math.hypot(onLine.x2 - pieces.x1[i], onLine.y2 - pieces.y1[i]);
    const target = aim.distanceMm > 1e-9 ? { x: aim.x1, y: aim.y1 } : { x: onLine.x2, y: onLine.y2 };
    const pointsAtIt = pointsAt(target.x, target.y);
    const apartMm = 4 * (half + pieces.half[i] + wallMm);
    const isNear = (): boolean => isNearAlong(context, c, place.s, pieces.centreline[i], t, apartMm);
    if (!mayMiss(pointsAtIt, isNear)) continue;
    // Where there is no gap and a join is near, fluid passes: whether the right way is the etched area's affair.
    if (!isAbove(gap.distanceMm, 0) && isNear()) continue;
    if (tip.kind === 'fan' && !recedesFrom((x, y) => distanceToPiece(x, y, i))) continue;
    consider({
      tip,
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
  for (const p of portsNear(context, tip.x, tip.y, limitMm + half * Math.SQRT2)) {
    const port = chip.ports[p];
    const gap = painted.map((face) => gapOfEndToHole(face, port)).reduce(nearer);
    if (!isBelow(gap.distanceMm, limitMm)) continue;
    const pointsAtIt = pointsAt(port.xMm, port.yMm);
    if (!mayMiss(pointsAtIt, () => isNearPort(context, c, place.s, p, 4 * (2 * half + wallMm)))) continue;
    if (tip.kind === 'fan' && !recedesFrom((x, y) => Math.hypot(x - port.xMm, y - port.yMm))) continue;
    consider({
      tip,
      end,
      centreline: c,
      missed: -1,
      port: p,
      missedEnd: -1,
      gapMm: Math.max(0, gap.distanceMm),
      limitMm,
      reachMm: Math.max(0, Math.hypot(port.xMm - tip.x, port.yMm - tip.y) - port.radiusMm),
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

  /**
   * What an end leads to by a short way (its own last bend, its own junction) it does not miss, unless it points back at
   * it. A fan may be a mere corner: it misses only what it points at, and never what it leads to by a short way.
   */
  function mayMiss(pointsAtIt: boolean, isNear: () => boolean): boolean {
    return tip.kind === 'end' ? pointsAtIt || !isNear() : pointsAtIt && !isNear();
  }

  function pointsAt(x: number, y: number): boolean {
    const dx = x - tip.x;
    const dy = y - tip.y;
    const distance = Math.hypot(dx, dy);
    return distance === 0 || !isAbove(COS_45 * distance, dx * tip.outX + dy * tip.outY + 1e-12);
  }

  /** Whether every channel of a fan leads away from a thing: a corner beside a channel that turns with it does not. */
  function recedesFrom(distanceTo: (x: number, y: number) => number): boolean {
    const here = distanceTo(tip.x, tip.y);
    return places.every(({ piece, s }) => {
      const away = Math.min(4 * half, pieces.centrelineLength[pieces.centreline[piece]]);
      const [x, y] = pointOn(network, pieces.centreline[piece], s === 0 ? away : s - away);
      return distanceTo(x, y) >= here + LEAST_RECESSION * away;
    });
  }

  function distanceToPiece(x: number, y: number, i: number): number {
    return distanceToSegment(x, y, pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]);
  }

  /** The end of the missed centreline that stands at a tip, when it is its painted end that is nearest. */
  function missedEndOf(i: number, gapMm: number): number {
    const other = pieces.centreline[i];
    for (const e of [2 * other, 2 * other + 1]) {
      if (tipOfEnd(context)[e] < 0 || endPlace(network, e).piece !== i) continue;
      const face = paintedEndOf(network, e);
      if (painted.some((own) => gapOfEnds(own, face).distanceMm <= gapMm + 1e-9)) return e;
    }
    return -1;
  }
}

/** End pieces that rule 4 left out at tips: a stroke that is kept covers the same ground. */
const leftOutPieces = oncePerContext(
  (context) =>
    new Set(
      tipsOf(context).flatMap(({ leftOut }) => leftOut.map((end) => endPlace(context.network, end).piece)),
    ),
);

/** A channel of a fan leads away from what the fan misses by at least this share of the way along it. */
const LEAST_RECESSION = 0.15;
