import { isAbove, isBelow } from '../asked/within.ts';
import { grouped } from '../by-key.ts';
import { minWallMm } from '../chip/limits.ts';
import { distanceToPiece } from '../geometry/on-piece.ts';
import type { Network } from '../network/types.ts';
import { type Closest, closestPoints, type Line, lineBetween, nearer } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { portsNear } from './near-ports.ts';
import { gapOf, gapTo, gapToHole, lineOf, type Painted, paintedEnd, paintedHole } from './painted.ts';
import { pairKey } from './pairs.ts';
import { channelMember, type PartMember, portMember } from './parts.ts';
import { isNearAlong, isNearPort, type OnCentreline, pointOn } from './paths.ts';
import type { ThinWall } from './thin.ts';
import { endPlace, type Tip, tipOfEnd, tipsOf } from './tips.ts';

/** A tip that just misses a strip or a well. */
export interface NearMiss {
  readonly tip: Tip;
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
  readonly mark: Line;
}

/** All near misses, at most one for each tip; two tips that miss each other are one. */
export const nearMisses = oncePerContext((context): readonly NearMiss[] => {
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

/** What a tip's channel is, and what it misses. */
export function sidesOf(context: FindingContext, { tip, missed, port }: NearMiss): [PartMember, PartMember] {
  const other = port >= 0 ? portMember(context, port) : channelMember(context, missed);
  return [channelMember(context, tip.ends[0] >> 1), other];
}

/** Whether a thin wall is nothing but the near miss itself: all of it lies at the end that misses. */
export function replacesWall(context: FindingContext, wall: ThinWall): boolean {
  const { network } = context;
  const { pieces } = network.trace.near;
  return (missesByPair(context).get(pairKey(wall.centrelineA, wall.centrelineB)) ?? []).some(({ miss }) => {
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

const missesByPair = oncePerContext((context) => {
  const pairs = nearMisses(context)
    .filter(({ port }) => port < 0)
    .flatMap((miss) => miss.tip.ends.map((end) => ({ miss, key: pairKey(end >> 1, miss.missed) })));
  return grouped(pairs, ({ key }) => key);
});

/** A miss is judged against at most this much of the channel's width. */
const MOST_WIDTH_MM = 0.5;

const COS_45 = Math.SQRT1_2;

/** A tip with what it takes to judge what it misses. */
interface Aim {
  readonly tip: Tip;
  /** Its first end, and the places of all. */
  readonly at: OnCentreline;
  readonly places: readonly ReturnType<typeof endPlace>[];
  /** Half the width of its widest channel, mm. */
  readonly half: number;
  readonly wallMm: number;
  readonly limitMm: number;
  readonly painted: readonly Painted[];
}

function toAim({ chip, network }: FindingContext, tip: Tip): Aim {
  const { pieces } = network.trace.near;
  const places = tip.ends.map((end) => endPlace(network, end));
  const [{ piece, s }] = places;
  const at = { c: pieces.centreline[piece], s };
  const half = pieces.half[piece];
  const wallMm = minWallMm(chip, chip.channels[pieces.channel[piece]].depthMm)?.value ?? 0;
  const limitMm = Math.max(wallMm, Math.min(2 * half, MOST_WIDTH_MM));
  // Of strokes that come from one side the widest paints the tip; those of a fan each paint their part.
  const ends = tip.kind === 'end' ? tip.ends.slice(0, 1) : tip.ends;
  const painted = ends.map((end) => paintedEnd(network, end));
  return { tip, at, places, half, wallMm, limitMm, painted };
}

/** The thing that a tip most likely was to meet: what it points at goes before, then what is nearest. */
function findMiss(context: FindingContext, tip: Tip): NearMiss | null {
  const aim = toAim(context, tip);
  let best: NearMiss | null = null;
  for (const miss of [...missedPieces(context, aim), ...missedPorts(context, aim)]) {
    const isBetter =
      best === null || (miss.pointsAtIt === best.pointsAtIt ? miss.gapMm < best.gapMm : miss.pointsAtIt);
    if (isBetter) best = miss;
  }
  return best;
}

function missedPieces(context: FindingContext, aim: Aim): NearMiss[] {
  const { pieces, index } = context.network.trace.near;
  const { tip, places, half, limitMm } = aim;
  const own = new Set(places.map(({ piece }) => piece));
  const plane = pieces.plane[places[0].piece];
  const leftOut = leftOutPieces(context);
  const r = limitMm + half * Math.SQRT2 + half;
  return index
    .search(
      tip.x - r,
      tip.y - r,
      tip.x + r,
      tip.y + r,
      (i) => pieces.plane[i] === plane && !own.has(i) && !leftOut.has(i),
    )
    .flatMap((i) => missOfPiece(context, aim, i) ?? []);
}

function missOfPiece(context: FindingContext, aim: Aim, i: number): NearMiss | null {
  const { chip, network } = context;
  const { pieces } = network.trace.near;
  const { tip, half, wallMm, painted } = aim;
  const gap = painted.map((end) => gapTo(chip, pieces, i, end)).reduce(nearer);
  if (!isBelow(gap.distanceMm, aim.limitMm)) return null;
  // Seen from the middle of the end, the nearest painted point says where it points and how far it must go.
  const toward = gapToHole(chip, pieces, i, { xMm: tip.x, yMm: tip.y, radiusMm: 0 });
  const onLine = closestPoints([tip.x, tip.y, tip.x, tip.y], lineOf(pieces, i));
  const t = pieces.start[i] + Math.hypot(onLine.x2 - pieces.x1[i], onLine.y2 - pieces.y1[i]);
  const pointsAtIt =
    toward.distanceMm > 1e-9 ? pointsAt(tip, toward.x1, toward.y1) : pointsAt(tip, onLine.x2, onLine.y2);
  const apartMm = 4 * (half + pieces.half[i] + wallMm);
  const missed = pieces.centreline[i];
  const isNear = (): boolean => isNearAlong(context, aim.at, { c: missed, s: t }, apartMm);
  if (!mayMiss(tip, pointsAtIt, isNear)) return null;
  // Where there is no gap and a join is near, fluid passes: whether the right way is the etched area's affair.
  if (!isAbove(gap.distanceMm, 0) && isNear()) return null;
  if (tip.kind === 'fan' && !recedes(network, aim, (x, y) => distanceToPiece(pieces, i, x, y))) return null;
  const missedEnd = missedEndOf(context, aim, i, gap.distanceMm);
  return toMiss(aim, gap, toward.distanceMm, { pointsAtIt, missed, missedEnd, port: -1 });
}

function missedPorts(context: FindingContext, aim: Aim): NearMiss[] {
  const { tip, half, wallMm, limitMm, painted } = aim;
  return portsNear(context, tip.x, tip.y, limitMm + half * Math.SQRT2).flatMap((port) => {
    const well = context.chip.ports[port];
    const { xMm, yMm, radiusMm } = well;
    const gap = painted.map((end) => gapOf(end, paintedHole(well))).reduce(nearer);
    if (!isBelow(gap.distanceMm, limitMm)) return [];
    const pointsAtIt = pointsAt(tip, xMm, yMm);
    const isNear = (): boolean => isNearPort(context, aim.at, port, 4 * (2 * half + wallMm));
    if (!mayMiss(tip, pointsAtIt, isNear)) return [];
    const distanceTo = (x: number, y: number): number => Math.hypot(x - xMm, y - yMm);
    if (tip.kind === 'fan' && !recedes(context.network, aim, distanceTo)) return [];
    const reachMm = Math.hypot(xMm - tip.x, yMm - tip.y) - radiusMm;
    return [toMiss(aim, gap, reachMm, { pointsAtIt, missed: -1, missedEnd: -1, port })];
  });
}

function toMiss(
  { tip, limitMm }: Aim,
  gap: Closest,
  reachMm: number,
  what: Pick<NearMiss, 'pointsAtIt' | 'missed' | 'missedEnd' | 'port'>,
): NearMiss {
  const gapMm = Math.max(0, gap.distanceMm);
  return { tip, ...what, gapMm, limitMm, reachMm: Math.max(0, reachMm), mark: lineBetween(gap) };
}

/**
 * What an end leads to by a short way (its own last bend, its own junction) it does not miss, unless it points back at
 * it. A fan may be a mere corner: it misses only what it points at, and never what it leads to by a short way.
 */
function mayMiss({ kind }: Tip, pointsAtIt: boolean, isNear: () => boolean): boolean {
  return kind === 'end' ? pointsAtIt || !isNear() : pointsAtIt && !isNear();
}

function pointsAt(tip: Tip, x: number, y: number): boolean {
  const dx = x - tip.x;
  const dy = y - tip.y;
  const distance = Math.hypot(dx, dy);
  return distance === 0 || !isAbove(COS_45 * distance, dx * tip.outX + dy * tip.outY + 1e-12);
}

/** Whether every channel of a fan leads away from a thing: a corner beside a channel that turns with it does not. */
function recedes(
  network: Network,
  { tip, places, half }: Aim,
  distanceTo: (x: number, y: number) => number,
): boolean {
  const { pieces } = network.trace.near;
  const here = distanceTo(tip.x, tip.y);
  return places.every(({ piece, s }) => {
    const c = pieces.centreline[piece];
    const away = Math.min(4 * half, pieces.centrelineLength[c]);
    const [x, y] = pointOn(network, c, s === 0 ? away : s - away);
    return distanceTo(x, y) >= here + LEAST_RECESSION * away;
  });
}

/** The end of the missed centreline that stands at a tip, when it is its painted end that is nearest. */
function missedEndOf(context: FindingContext, { painted }: Aim, i: number, gapMm: number): number {
  const { network } = context;
  const other = network.trace.near.pieces.centreline[i];
  const missed = [2 * other, 2 * other + 1].find((end) => {
    if (tipOfEnd(context)[end] < 0 || endPlace(network, end).piece !== i) return false;
    const face = paintedEnd(network, end);
    return painted.some((own) => gapOf(own, face).distanceMm <= gapMm + 1e-9);
  });
  return missed ?? -1;
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
