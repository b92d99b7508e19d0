import type { Chip } from '../chip/types.ts';
import type { Nearness } from '../geometry/near.ts';
import { placeOn } from '../geometry/on-piece.ts';
import { closestPoints, type Line, lineBetween, pointLine } from './closest.ts';
import type { FindingContext } from './context.ts';
import { liesInThird } from './etched-area.ts';
import { type FacedWalls, facedWalls, facing, facingTest, gapAt } from './faced-walls.ts';
import { onlyGrows } from './growth.ts';
import { gapBetween, lineOf } from './painted.ts';
import { channelPaths, pointOn, type Route, routeLength } from './paths.ts';
import { coveredLength, extentOf, type Facing, groupStretches, type Wall } from './stretches.ts';

/**
 * Where two channels, or two stretches of one, leave less material between them than a limit, at places further apart
 * along the channels than 4 × (mean width + limit). Nearer than that they are one duct turning or two that part.
 */
export interface ThinWall extends Wall {
  readonly limitMm: number;
}

/** One pair of pieces' share of a thin wall. */
interface ThinStretch extends Facing {
  readonly faced: FacedWalls;
  /** All of piece i that is thin, also where the way along the channels is short. */
  readonly thinFrom: number;
  readonly thinTo: number;
  /** Length along the channels from one side to the other, at from and at to. */
  readonly wayFrom: number;
  readonly wayTo: number;
  /** Material at from and at to, and at the thinnest place. */
  readonly gapFrom: number;
  readonly gapTo: number;
  readonly gapMm: number;
  /** Position on a of the thinnest place. */
  readonly thinnestAt: number;
}

/**
 * Finds the thin walls among the near pairs. `limitOf` gives the limit between two channels (mm), NaN for none.
 *
 * A thin stretch that begins at the node or corner where the two sides part is a wedge between them, not a wall, and is
 * left out. Cost: linear in the near pairs, and a small search for each pair that is thin.
 */
export function findThinWalls(
  context: FindingContext,
  near: Nearness,
  limitOf: (channelA: number, channelB: number) => number,
): ThinWall[] {
  const { pieces } = near;
  const stretches: ThinStretch[] = [];
  for (let k = 0; k < near.pairCount; k++) {
    const i = near.pairA[k];
    const j = near.pairB[k];
    const limitMm = limitOf(pieces.channel[i], pieces.channel[j]);
    const faced = Number.isNaN(limitMm) ? null : facedWalls(context, near, k, limitMm);
    if (faced !== null) addThinStretches(stretches, context, faced);
  }
  return groupStretches(stretches, ({ faced }) => faced.apartMm / 2)
    .filter((group) => !isNoWall(context, group))
    .map((group) => toThinWall(context, group));
}

/** Whether the stretch lies in a third strip, or begins where the two sides part, at either of its ends, and they only move apart from there. */
function isNoWall(context: FindingContext, group: readonly ThinStretch[]): boolean {
  const first = group[0];
  const last = group.reduce((most, stretch) => (stretch.to > most.to ? stretch : most), first);
  const start = { stretch: first, s: first.from, t: first.otherFrom, way: first.wayFrom };
  const end = { stretch: last, s: last.to, t: last.otherTo, way: last.wayTo };
  return (
    (isInThird(context, start) && isInThird(context, end)) ||
    partsFrom(context, group, start) ||
    partsFrom(context, group, end)
  );
}

/** Where a thin wall begins or ends: positions on a and b, and the way along the channels between them, mm. */
interface WallEnd {
  readonly stretch: ThinStretch;
  readonly s: number;
  readonly t: number;
  readonly way: number;
}

function partsFrom(context: FindingContext, group: readonly ThinStretch[], end: WallEnd): boolean {
  const { apartMm } = end.stretch.faced;
  const samples = group.flatMap(({ from, to, gapFrom, gapTo, gapMm, thinnestAt }) => [
    { way: Math.abs(from - end.s), apart: gapFrom },
    { way: Math.abs(thinnestAt - end.s), apart: gapMm },
    { way: Math.abs(to - end.s), apart: gapTo },
  ]);
  if (!onlyGrows(samples, apartMm, context.chip.joinWithinMm)) return false;
  if (isInThird(context, end)) return true;
  // A group that does not go down to the least way (give or take the jump from one chord of a curve to the next) begins
  // further along: a stretch of its own.
  const farMm = samples.reduce((most, sample) => Math.max(most, sample.way), 0);
  return end.way <= 1.25 * apartMm && partInProportion(context, end, farMm);
}

/**
 * Whether both sides lie in one third strip there that both are joined to: two feeders that end side by side in a chamber
 * part at its wall, however far apart their nodes are on its centreline, and in it there is no wall between them.
 */
function isInThird(context: FindingContext, { stretch: { a, b, faced }, s, t }: WallEnd): boolean {
  const { network } = context;
  return liesInThird(context, faced.i, faced.j, pointOn(network, a, s), pointOn(network, b, t));
}

/**
 * Two straight arms move apart in proportion to the way from where they part; round a hairpin, or on two rungs of one
 * ladder, they reach their distance at once and keep it. So the distance is compared with that at half the way; of arms
 * that part along a tangent where they have come apart at all, at most `farMm` further on.
 */
function partInProportion(context: FindingContext, end: WallEnd, farMm: number): boolean {
  const { stretch, s, t } = end;
  const { a, b, faced } = stretch;
  const { network } = context;
  const paths = channelPaths(context);
  const route = shortest(paths.routes(paths.arcAt(a, s), paths.arcAt(b, t), faced.apartMm), s, t);
  if (route === null) return false;
  if (route.kind === 'along') return isProportional(s, t, (3 * s + t) / 4, (s + 3 * t) / 4);
  // From a port the sides part at its centre, not at the rim where the way begins; and an end that was carried on begins
  // inside the other's strip, wherever the node is. There it is enough that they only move apart.
  const node = route.vertex;
  const isPort = node >= 0 && node < network.nodeCount && network.nodePort[node] >= 0;
  if (isPort || (node >= 0 && (isCarriedOn(a, route.leaveAt) || isCarriedOn(b, route.enterAt)))) return true;
  // Joined a little way from where they part (drawn at rounding), one side's way begins there, as if it had gone on back.
  const { leaveAt, enterAt, lengthMm } = route;
  const backA = leaveAt - Math.sign(s - leaveAt) * lengthMm;
  const backB = enterAt - Math.sign(t - enterAt) * lengthMm;
  for (let times = 1; ; times *= 2) {
    const onA = leaveAt + times * (s - leaveAt);
    const onB = enterAt + times * (t - enterAt);
    const halfA = (onA + leaveAt) / 2;
    const halfB = (onB + enterAt) / 2;
    const parts =
      isProportional(onA, onB, halfA, halfB) ||
      isProportional(onA, onB, (onA + backA) / 2, halfB) ||
      isProportional(onA, onB, halfA, (onB + backB) / 2);
    if (parts) return true;
    const areApart = distanceBetween(onA, onB) > context.chip.joinWithinMm;
    const step = Math.abs(s - leaveAt);
    if (areApart || step === 0 || (2 * times - 1) * step > farMm) return false;
  }

  function isCarriedOn(centreline: number, position: number): boolean {
    return position < 0 || position > network.trace.near.pieces.centrelineLength[centreline];
  }

  function isProportional(onA: number, onB: number, halfA: number, halfB: number): boolean {
    // Two centrelines still on each other have not parted at all: one drawn through the other's strip.
    const apart = distanceBetween(onA, onB);
    return apart > context.chip.joinWithinMm && apart >= 1.5 * distanceBetween(halfA, halfB);
  }

  function distanceBetween(onA: number, onB: number): number {
    const [x1, y1] = pointOn(network, a, onA);
    const [x2, y2] = pointOn(network, b, onB);
    return Math.hypot(x2 - x1, y2 - y1);
  }
}

function shortest(routes: readonly Route[], s: number, t: number): Route | null {
  let best: Route | null = null;
  for (const route of routes) {
    if (best === null || routeLength(route, s, t) < routeLength(best, s, t)) best = route;
  }
  return best;
}

function toThinWall({ chip }: FindingContext, group: readonly ThinStretch[]): ThinWall {
  const gapMm = group.reduce((least, stretch) => Math.min(least, stretch.gapMm), Number.POSITIVE_INFINITY);
  let thinnest = group.find((stretch) => stretch.gapMm === gapMm) ?? group[0];
  // Equally thin for long: the middle of the longest such stretch is where to look.
  for (const stretch of group) {
    if (stretch.gapMm <= gapMm + 1e-9 && stretch.to - stretch.from > thinnest.to - thinnest.from + 1e-6)
      thinnest = stretch;
  }
  return {
    pieceA: thinnest.faced.i,
    pieceB: thinnest.faced.j,
    ...extentOf(group),
    lengthMm: coveredLength(group.map(({ thinFrom, thinTo }) => [thinFrom, thinTo])),
    gapMm: thinnest.gapMm,
    limitMm: thinnest.faced.limitMm,
    mark: markAt(chip, thinnest),
  };
}

/** From wall to wall at the thinnest place of a stretch. */
function markAt(chip: Chip, { faced, gapMm, thinnestAt }: ThinStretch): Line {
  const { pieces, i, j } = faced;
  const { half } = pieces;
  const t = Math.min(1, Math.max(0, (thinnestAt - pieces.start[i]) / pieces.length[i]));
  const { x, y } = placeOn(pieces, i, t);
  const { distanceMm, x1, y1, x2, y2 } = closestPoints(pointLine(x, y), lineOf(pieces, j));
  if (distanceMm === 0) return pointLine(x, y);
  const mayBeFlat = chip.channels[pieces.channel[i]].linecap !== 'round';
  if (mayBeFlat && distanceMm - half[i] - half[j] < gapMm - 1e-9)
    return lineBetween(gapBetween(chip, pieces, i, j));
  const ux = (x2 - x1) / distanceMm;
  const uy = (y2 - y1) / distanceMm;
  return [x1 + ux * half[i], y1 + uy * half[i], x2 - ux * half[j], y2 - uy * half[j]];
}

/** The parts of the first piece that are thin and far enough along the channels. */
function addThinStretches(into: ThinStretch[], context: FindingContext, faced: FacedWalls): void {
  const { pieces, i, j, apartMm, nearestAt, slope } = faced;
  const a = pieces.centreline[i];
  const b = pieces.centreline[j];
  const paths = channelPaths(context);
  const faces = facingTest(context, pieces, i, j);
  const cuts = cutsOf(context, faced, faces.cuts);
  for (let k = 0; k + 1 < cuts.length; k++) {
    const low = cuts[k];
    const high = cuts[k + 1];
    if (high - low <= 1e-9 && cuts.length > 2) continue;
    const middle = (low + high) / 2;
    const across = facing(faced, middle);
    if (!faces.at(middle) || paths.isInWell(a, middle) || paths.isInWell(b, across)) continue;
    const arcA = paths.arcAt(a, middle);
    const arcB = paths.arcAt(b, across);
    if (arcA < 0 || arcB < 0) continue;
    const routes = paths.routes(arcA, arcB, apartMm);
    const far = farStretch(routes, faced, low, high);
    if (far === null) continue;
    const [from, to] = far;
    const [otherFrom, otherTo] = [facing(faced, from), facing(faced, to)];
    const thinnestAt = evenlyThin(slope) ? (from + to) / 2 : Math.min(to, Math.max(from, nearestAt));
    into.push({
      a,
      b,
      faced,
      from,
      to,
      otherFrom,
      otherTo,
      thinFrom: Math.min(from, low),
      thinTo: Math.max(to, high),
      wayFrom: wayOf(routes, from, otherFrom),
      wayTo: wayOf(routes, to, otherTo),
      gapFrom: gapAt(faced, from),
      gapTo: gapAt(faced, to),
      gapMm: gapAt(faced, thinnestAt),
      thinnestAt,
    });
  }
}

/** Positions on i between which the way from one to the place that it faces is the least of a few linear functions. */
function cutsOf(context: FindingContext, faced: FacedWalls, faceCuts: readonly number[]): number[] {
  const { pieces, i, j, thinFrom, thinTo, slope, offset } = faced;
  const paths = channelPaths(context);
  const cuts = [...faceCuts];
  if (Math.abs(slope) > 1e-9) {
    const bounds = [pieces.start[j], pieces.start[j] + pieces.length[j]];
    const [low, high] = [facing(faced, thinFrom), facing(faced, thinTo)];
    paths.addBounds(bounds, pieces.centreline[j], Math.min(low, high), Math.max(low, high));
    for (const t of bounds) cuts.push(pieces.start[i] + (t - pieces.start[j] - offset) / slope);
  }
  const inside = [thinFrom, thinTo, ...cuts.filter((s) => s > thinFrom && s < thinTo)];
  paths.addBounds(inside, pieces.centreline[i], thinFrom, thinTo);
  return inside.sort((p, q) => p - q);
}

/** Where on [low, high] every route is longer than apartMm: each is linear there, so it is one stretch. */
function farStretch(
  routes: readonly Route[],
  faced: FacedWalls,
  low: number,
  high: number,
): readonly [number, number] | null {
  let from = low;
  let to = high;
  const { apartMm } = faced;
  const otherLow = facing(faced, low);
  const otherHigh = facing(faced, high);
  for (const route of routes) {
    const atLow = routeLength(route, low, otherLow) - apartMm;
    const atHigh = routeLength(route, high, otherHigh) - apartMm;
    if (atLow <= 0 && atHigh <= 0) return null;
    if (atLow > 0 && atHigh > 0) continue;
    const crossing = low + ((high - low) * atLow) / (atLow - atHigh);
    if (atLow <= 0) from = Math.max(from, crossing);
    else to = Math.min(to, crossing);
  }
  return from < to || (from === to && low === high) ? [from, to] : null;
}

function wayOf(routes: readonly Route[], s: number, t: number): number {
  const route = shortest(routes, s, t);
  return route === null ? Number.POSITIVE_INFINITY : routeLength(route, s, t);
}

/** Cosine so near 1 that over a metre the two pieces move apart by less than a micrometre. */
function evenlyThin(cosine: number): boolean {
  return 1 - Math.abs(cosine) < 1e-12;
}
