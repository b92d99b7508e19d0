import type { Nearness } from '../geometry/near.ts';
import type { Pieces } from '../geometry/pieces.ts';
import { closestPoints, type Line, stretchWithin } from './closest.ts';
import type { FindingContext } from './context.ts';
import { gapBetween, hasFlatEnd, lineOf } from './painted.ts';
import { type ChannelPaths, channelPaths, pointOn, type Route, routeLength } from './paths.ts';
import { type Facing, groupStretches } from './stretches.ts';

/**
 * Where two channels, or two stretches of one, leave less material between them than a limit, at places further apart
 * along the channels than 4 × (mean width + limit). Nearer than that they are one duct turning or two that part.
 */
export interface ThinWall {
  /** Pieces at the thinnest place. */
  readonly pieceA: number;
  readonly pieceB: number;
  readonly centrelineA: number;
  readonly centrelineB: number;
  /** Extent on centreline A and on B, mm. */
  readonly fromA: number;
  readonly toA: number;
  readonly fromB: number;
  readonly toB: number;
  /** Length of thin wall along A, mm. */
  readonly lengthMm: number;
  /** Thinnest material; 0 or less where the painted areas touch or overlap. */
  readonly gapMm: number;
  readonly limitMm: number;
  /** Wall points that face each other at the thinnest place. */
  readonly mark: Line;
}

/** One pair of pieces' share of a thin wall. */
interface ThinStretch extends Facing {
  readonly i: number;
  readonly j: number;
  /** All of piece i that is thin, also where the way along the channels is short. */
  readonly thinFrom: number;
  readonly thinTo: number;
  readonly apartMm: number;
  readonly limitMm: number;
  /** Length along the channels from one side to the other, at from and at to. */
  readonly wayFrom: number;
  readonly wayTo: number;
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
    if (Number.isNaN(limitMm)) continue;
    addThinStretches(stretches, context, pieces, i, j, near.pairDistance[k], limitMm);
  }
  const paths = channelPaths(context);
  return groupStretches(stretches, ({ apartMm }) => apartMm / 2)
    .filter((group) => !isWedge(context, paths, group))
    .map((group) => toThinWall(context, pieces, group));
}

/** Two sides part for good: the wedge between them grows by at least the join slack over one such distance. */
function isWedge(context: FindingContext, paths: ChannelPaths, group: readonly ThinStretch[]): boolean {
  const { network, chip } = context;
  let nearest = group[0];
  let atFrom = true;
  for (const stretch of group) {
    const way = atFrom ? nearest.wayFrom : nearest.wayTo;
    if (stretch.wayFrom < way) {
      nearest = stretch;
      atFrom = true;
    }
    if (stretch.wayTo < (atFrom ? nearest.wayFrom : nearest.wayTo)) {
      nearest = stretch;
      atFrom = false;
    }
  }
  const { apartMm } = nearest;
  if ((atFrom ? nearest.wayFrom : nearest.wayTo) > apartMm * (1 + 1e-6)) return false;
  const s = atFrom ? nearest.from : nearest.to;
  const t = atFrom ? nearest.otherFrom : nearest.otherTo;
  return (
    onlyGrows(group, s, apartMm, chip.joinWithinMm) && partsInProportion(context, paths, nearest, s, t)
  );

  /**
   * Two straight arms move apart in proportion to the way from where they part; round a hairpin or over a rung they
   * reach their distance at once and keep it. So the distance at half the way is asked for.
   */
  function partsInProportion(
    _context: FindingContext,
    { arcAt, routes }: ChannelPaths,
    { a, b }: ThinStretch,
    sideA: number,
    sideB: number,
  ): boolean {
    const route = shortest(
      routes.call(paths, arcAt.call(paths, a, sideA), arcAt.call(paths, b, sideB), apartMm),
      sideA,
      sideB,
    );
    if (route === null) return false;
    let halfA = (3 * sideA + sideB) / 4;
    let halfB = (sideA + 3 * sideB) / 4;
    if (route.kind === 'over') {
      // From a port the sides part at its centre, not at the rim where the way begins; that they only grow apart is enough.
      if (route.vertex >= 0 && route.vertex < network.nodeCount && network.nodePort[route.vertex] >= 0) return true;
      halfA = (sideA + route.leaveAt) / 2;
      halfB = (sideB + route.enterAt) / 2;
    }
    return distanceBetween(a, sideA, b, sideB) >= 1.5 * distanceBetween(a, halfA, b, halfB);
  }

  function distanceBetween(a: number, s1: number, b: number, s2: number): number {
    const [x1, y1] = pointOn(network, a, s1);
    const [x2, y2] = pointOn(network, b, s2);
    return Math.hypot(x2 - x1, y2 - y1);
  }
}

/** Whether, walked from position s (an end of the group), the gap never falls and never stands still for long. */
function onlyGrows(group: readonly ThinStretch[], s: number, apartMm: number, slackMm: number): boolean {
  const low = group[0].from;
  const high = group.reduce((most, stretch) => Math.max(most, stretch.to), low);
  const forward = s - low <= high - s;
  if ((forward ? s - low : high - s) > slackMm) return false;
  const samples: { way: number; gap: number }[] = [];
  for (const { from, to, gapFrom, gapTo, gapMm, thinnestAt } of group) {
    samples.push({ way: Math.abs(from - s), gap: gapFrom });
    samples.push({ way: Math.abs(thinnestAt - s), gap: gapMm });
    samples.push({ way: Math.abs(to - s), gap: gapTo });
  }
  samples.sort((p, q) => p.way - q.way || p.gap - q.gap);
  let { way, gap } = samples[0];
  for (const sample of samples) {
    if (sample.gap < gap - slackMm) return false;
    const share = (sample.way - way) / apartMm;
    if (share > 1 && sample.gap - gap <= slackMm * share) return false;
    if (sample.gap > gap + slackMm) ({ way, gap } = sample);
  }
  return true;
}

function shortest(routes: readonly Route[], s: number, t: number): Route | null {
  let best: Route | null = null;
  for (const route of routes) {
    if (best === null || routeLength(route, s, t) < routeLength(best, s, t)) best = route;
  }
  return best;
}

function toThinWall({ chip }: FindingContext, pieces: Pieces, group: readonly ThinStretch[]): ThinWall {
  let thinnest = group[0];
  let fromB = Number.POSITIVE_INFINITY;
  let toB = Number.NEGATIVE_INFINITY;
  let toA = Number.NEGATIVE_INFINITY;
  for (const stretch of group) {
    if (stretch.gapMm < thinnest.gapMm) thinnest = stretch;
    fromB = Math.min(fromB, stretch.otherFrom, stretch.otherTo);
    toB = Math.max(toB, stretch.otherFrom, stretch.otherTo);
    toA = Math.max(toA, stretch.to);
  }
  // Equally thin for long: the middle of the place is where to look.
  const even = group.filter(({ gapMm }) => gapMm <= thinnest.gapMm + 1e-9);
  thinnest = even[even.length >> 1];
  const { i, j, gapMm, limitMm } = thinnest;
  return {
    pieceA: i,
    pieceB: j,
    centrelineA: thinnest.a,
    centrelineB: thinnest.b,
    fromA: group[0].from,
    toA,
    fromB,
    toB,
    lengthMm: coveredThin(group),
    gapMm,
    limitMm,
    mark: markAt(chip.channels[pieces.channel[i]].linecap !== 'round'),
  };

  function markAt(mayBeFlat: boolean): Line {
    const { thinnestAt } = thinnest;
    const t = Math.min(1, Math.max(0, (thinnestAt - pieces.start[i]) / pieces.length[i]));
    const px = pieces.x1[i] + t * (pieces.x2[i] - pieces.x1[i]);
    const py = pieces.y1[i] + t * (pieces.y2[i] - pieces.y1[i]);
    const c = closestPoints([px, py, px, py], lineOf(pieces, j));
    if (c.distanceMm === 0) return [px, py, px, py];
    if (mayBeFlat && c.distanceMm - pieces.half[i] - pieces.half[j] < gapMm - 1e-9) {
      const exact = gapBetween(chip, pieces, i, j);
      return [exact.x1, exact.y1, exact.x2, exact.y2];
    }
    const ux = (c.x2 - c.x1) / c.distanceMm;
    const uy = (c.y2 - c.y1) / c.distanceMm;
    return [
      c.x1 + ux * pieces.half[i],
      c.y1 + uy * pieces.half[i],
      c.x2 - ux * pieces.half[j],
      c.y2 - uy * pieces.half[j],
    ];
  }
}

function coveredThin(group: readonly ThinStretch[]): number {
  let covered = 0;
  let reach = Number.NEGATIVE_INFINITY;
  for (const { thinFrom, thinTo } of [...group].sort((p, q) => p.thinFrom - q.thinFrom)) {
    if (thinTo <= reach) continue;
    covered += thinTo - Math.max(thinFrom, reach);
    reach = thinTo;
  }
  return covered;
}

/** Two straight pieces nearer than the limit: the part of the first that is thin and far enough along the channels. */
function addThinStretches(
  into: ThinStretch[],
  context: FindingContext,
  pieces: Pieces,
  i: number,
  j: number,
  distanceMm: number,
  limitMm: number,
): void {
  const { chip } = context;
  const halves = pieces.half[i] + pieces.half[j];
  // The relative slack of a limit, and rounding of coordinates where the limit is nought.
  const withinMm = halves + limitMm * (1 - 1e-9) - (limitMm === 0 ? -1e-9 * halves : 0);
  const flat = hasFlatEnd(chip, pieces, i) || hasFlatEnd(chip, pieces, j);
  if (!flat && distanceMm >= withinMm) return;
  // Straight pieces that meet move apart evenly: between them is a wedge from where they meet, never a wall.
  if (distanceMm <= chip.joinWithinMm && !areParallel(pieces, i, j)) return;
  const a = pieces.centreline[i];
  const b = pieces.centreline[j];
  const apartMm = 4 * (halves + limitMm);
  if (a === b && pieces.start[j] + pieces.length[j] - pieces.start[i] <= apartMm) return;
  let exactMm = Number.NEGATIVE_INFINITY;
  if (flat) {
    exactMm = gapBetween(chip, pieces, i, j).distanceMm;
    if (exactMm >= withinMm - halves) return;
  }
  const paths = channelPaths(context);
  const lineI = lineOf(pieces, i);
  const lineJ = lineOf(pieces, j);
  const closest = closestPoints(lineI, lineJ);
  const nearestAt = pieces.start[i] + Math.hypot(closest.x1 - pieces.x1[i], closest.y1 - pieces.y1[i]);
  const thin = stretchWithin(lineI, lineJ, withinMm);
  const thinFrom = thin === null ? nearestAt : pieces.start[i] + thin[0];
  const thinTo = thin === null ? nearestAt : pieces.start[i] + thin[1];

  const ux = (pieces.x2[i] - pieces.x1[i]) / pieces.length[i];
  const uy = (pieces.y2[i] - pieces.y1[i]) / pieces.length[i];
  const vx = (pieces.x2[j] - pieces.x1[j]) / pieces.length[j];
  const vy = (pieces.y2[j] - pieces.y1[j]) / pieces.length[j];
  const slope = ux * vx + uy * vy;
  const offset = (pieces.x1[i] - pieces.x1[j]) * vx + (pieces.y1[i] - pieces.y1[j]) * vy;
  const facing = (s: number): number =>
    pieces.start[j] + Math.min(pieces.length[j], Math.max(0, offset + slope * (s - pieces.start[i])));
  const gapAt = (s: number): number => {
    const t = s - pieces.start[i];
    const x = pieces.x1[i] + ux * t;
    const y = pieces.y1[i] + uy * t;
    return Math.max(closestPoints([x, y, x, y], lineJ).distanceMm - halves, exactMm);
  };

  // Between these positions the way from s to the place that it faces is the least of a few linear functions of s.
  const cuts = [thinFrom, thinTo];
  paths.addBounds(cuts, a, thinFrom, thinTo);
  if (Math.abs(slope) > 1e-9) {
    const toS = (t: number): number => pieces.start[i] + (t - pieces.start[j] - offset) / slope;
    const bounds = [pieces.start[j], pieces.start[j] + pieces.length[j]];
    const [low, high] = [facing(thinFrom), facing(thinTo)];
    paths.addBounds(bounds, b, Math.min(low, high), Math.max(low, high));
    for (const t of bounds) {
      const s = toS(t);
      if (s > thinFrom && s < thinTo) cuts.push(s);
    }
  }
  cuts.sort((p, q) => p - q);
  for (let k = 0; k + 1 < cuts.length; k++) {
    const low = cuts[k];
    const high = cuts[k + 1];
    if (high - low <= 1e-9 && cuts.length > 2) continue;
    const middle = (low + high) / 2;
    if (paths.isInWell(a, middle) || paths.isInWell(b, facing(middle))) continue;
    const arcA = paths.arcAt(a, middle);
    const arcB = paths.arcAt(b, facing(middle));
    if (arcA < 0 || arcB < 0) continue;
    const routes = paths.routes(arcA, arcB, apartMm);
    const far = farStretch(routes, low, high, facing, apartMm);
    if (far === null) continue;
    const [from, to] = far;
    const thinnestAt = evenlyThin(slope) ? (from + to) / 2 : Math.min(to, Math.max(from, nearestAt));
    into.push({
      a,
      b,
      i,
      j,
      from,
      to,
      otherFrom: facing(from),
      otherTo: facing(to),
      thinFrom: Math.min(from, low),
      thinTo: Math.max(to, high),
      apartMm,
      limitMm,
      wayFrom: wayOf(routes, from, facing(from)),
      wayTo: wayOf(routes, to, facing(to)),
      gapFrom: gapAt(from),
      gapTo: gapAt(to),
      gapMm: gapAt(thinnestAt),
      thinnestAt,
    });
  }
}

/** Where on [low, high] every route is longer than apartMm: each is linear there, so it is one stretch. */
function farStretch(
  routes: readonly Route[],
  low: number,
  high: number,
  facing: (s: number) => number,
  apartMm: number,
): readonly [number, number] | null {
  let from = low;
  let to = high;
  const otherLow = facing(low);
  const otherHigh = facing(high);
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
  let least = Number.POSITIVE_INFINITY;
  for (const route of routes) least = Math.min(least, routeLength(route, s, t));
  return least;
}

/** Cosine so near 1 that over a metre the two pieces move apart by less than a micrometre. */
function evenlyThin(cosine: number): boolean {
  return 1 - Math.abs(cosine) < 1e-12;
}

function areParallel(pieces: Pieces, i: number, j: number): boolean {
  const cross =
    (pieces.x2[i] - pieces.x1[i]) * (pieces.y2[j] - pieces.y1[j]) -
    (pieces.y2[i] - pieces.y1[i]) * (pieces.x2[j] - pieces.x1[j]);
  return Math.abs(cross) <= 1e-9 * pieces.length[i] * pieces.length[j];
}
