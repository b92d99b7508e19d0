import { LIMIT_SLACK } from '../chip/limits.ts';
import type { Nearness } from '../geometry/near.ts';
import type { Pieces } from '../geometry/pieces.ts';
import { distanceToSegment } from '../geometry/segment.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { closestPoints, type Line, stretchWithin } from './closest.ts';
import type { FindingContext } from './context.ts';
import { onlyGrows } from './growth.ts';
import { gapBetween, hasFlatEnd, lineOf } from './painted.ts';
import { channelPaths, pointOn, type Route, routeLength } from './paths.ts';
import { coveredLength, type Facing, groupStretches } from './stretches.ts';

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
  return groupStretches(stretches, ({ apartMm }) => apartMm / 2)
    .filter((group) => !isWedge(context, group))
    .map((group) => toThinWall(context, pieces, group));
}

/** Whether the stretch begins where the two sides part, at either of its ends, and they only move apart from there. */
function isWedge(context: FindingContext, group: readonly ThinStretch[]): boolean {
  const first = group[0];
  const last = group.reduce((most, stretch) => (stretch.to > most.to ? stretch : most), first);
  return (
    partsFrom(context, group, first, first.from, first.otherFrom, first.wayFrom) ||
    partsFrom(context, group, last, last.to, last.otherTo, last.wayTo)
  );
}

function partsFrom(
  context: FindingContext,
  group: readonly ThinStretch[],
  stretch: ThinStretch,
  s: number,
  t: number,
  way: number,
): boolean {
  // A group that does not go down to the least way (give or take the jump from one chord of a curve to the next) begins
  // further along: a stretch of its own.
  if (way > 1.25 * stretch.apartMm) return false;
  const samples = group.flatMap(({ from, to, gapFrom, gapTo, gapMm, thinnestAt }) => [
    { way: Math.abs(from - s), apart: gapFrom },
    { way: Math.abs(thinnestAt - s), apart: gapMm },
    { way: Math.abs(to - s), apart: gapTo },
  ]);
  return (
    onlyGrows(samples, stretch.apartMm, context.chip.joinWithinMm) && partInProportion(context, stretch, s, t)
  );
}

/**
 * Two straight arms move apart in proportion to the way from where they part; round a hairpin, or on two rungs of one
 * ladder, they reach their distance at once and keep it. So the distance is compared with that at half the way.
 */
function partInProportion(
  context: FindingContext,
  { a, b, apartMm }: ThinStretch,
  s: number,
  t: number,
): boolean {
  const { network } = context;
  const paths = channelPaths(context);
  const route = shortest(paths.routes(paths.arcAt(a, s), paths.arcAt(b, t), apartMm), s, t);
  if (route === null) return false;
  if (route.kind === 'along') return isProportional((3 * s + t) / 4, (s + 3 * t) / 4);
  // From a port the sides part at its centre, not at the rim where the way begins; and an end that was carried on begins
  // inside the other's strip, wherever the node is. There it is enough that they only move apart.
  const node = route.vertex;
  const isPort = node >= 0 && node < network.nodeCount && network.nodePort[node] >= 0;
  if (isPort || (node >= 0 && (isCarriedOn(a, route.leaveAt) || isCarriedOn(b, route.enterAt)))) return true;
  return isProportional((s + route.leaveAt) / 2, (t + route.enterAt) / 2);

  function isCarriedOn(centreline: number, position: number): boolean {
    return position < 0 || position > network.trace.near.pieces.centrelineLength[centreline];
  }

  function isProportional(halfS: number, halfT: number): boolean {
    // Two centrelines still on each other have not parted at all: one drawn through the other's strip.
    const apart = distanceBetween(s, t);
    return apart > context.chip.joinWithinMm && apart >= 1.5 * distanceBetween(halfS, halfT);
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
  // Equally thin for long: the middle of the longest such stretch is where to look.
  const least = thinnest.gapMm + 1e-9;
  for (const stretch of group) {
    if (stretch.gapMm <= least && stretch.to - stretch.from > thinnest.to - thinnest.from + 1e-6)
      thinnest = stretch;
  }
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
    lengthMm: coveredLength(group.map(({ thinFrom, thinTo }) => [thinFrom, thinTo])),
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
  const withinMm = halves + limitMm * (1 - LIMIT_SLACK) - (limitMm === 0 ? -1e-9 * halves : 0);
  const flat = hasFlatEnd(chip, pieces, i) || hasFlatEnd(chip, pieces, j);
  if (!flat && distanceMm >= withinMm) return;
  if (distanceMm <= chip.joinWithinMm && crossesSquarely(pieces, i, j)) return;
  const a = pieces.centreline[i];
  const b = pieces.centreline[j];
  const apartMm = 4 * (halves + limitMm);
  if (a === b && pieces.start[j] + pieces.length[j] - pieces.start[i] <= apartMm) return;
  const lineI = lineOf(pieces, i);
  const lineJ = lineOf(pieces, j);
  const closest = closestPoints(lineI, lineJ);
  // Half a width round the centreline is the painted area but for the square ends: where these face, they are measured.
  let exactMm = Number.NEGATIVE_INFINITY;
  if (
    flat &&
    distanceMm > 0 &&
    (isAtEnd(lineI, closest.x1, closest.y1) || isAtEnd(lineJ, closest.x2, closest.y2))
  ) {
    exactMm = gapBetween(chip, pieces, i, j).distanceMm;
    if (exactMm >= withinMm - halves) return;
  } else if (distanceMm >= withinMm) return;
  const paths = channelPaths(context);
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
    return Math.max(
      distanceToSegment(x, y, pieces.x1[j], pieces.y1[j], pieces.x2[j], pieces.y2[j]) - halves,
      exactMm,
    );
  };

  const faces = facingTest(context, pieces, i, j);
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
  for (const s of faces.cuts) if (s > thinFrom && s < thinTo) cuts.push(s);
  cuts.sort((p, q) => p - q);
  for (let k = 0; k + 1 < cuts.length; k++) {
    const low = cuts[k];
    const high = cuts[k + 1];
    if (high - low <= 1e-9 && cuts.length > 2) continue;
    const middle = (low + high) / 2;
    if (!faces.at(middle) || paths.isInWell(a, middle) || paths.isInWell(b, facing(middle))) continue;
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

/** sin α for tan(α/2) = 1/4: 2t/(1 + t²). */
const SQUARE_SINE = 0.5 / (1 + 1 / 16);

/** Cosine so near 1 that over a metre the two pieces move apart by less than a micrometre. */
function evenlyThin(cosine: number): boolean {
  return 1 - Math.abs(cosine) < 1e-12;
}

function isAtEnd([ax, ay, bx, by]: Line, x: number, y: number): boolean {
  return (x === ax && y === ay) || (x === bx && y === by);
}

/**
 * Straight pieces that meet at an angle α are thin up to R/sin α from there, R being both halves and the limit, and there
 * the way along the channels is R cot(α/2): never over the 4 R that make a wall when tan(α/2) is 1/4 or more.
 */
function crossesSquarely(pieces: Pieces, i: number, j: number): boolean {
  const cross =
    (pieces.x2[i] - pieces.x1[i]) * (pieces.y2[j] - pieces.y1[j]) -
    (pieces.y2[i] - pieces.y1[i]) * (pieces.x2[j] - pieces.x1[j]);
  return Math.abs(cross) >= SQUARE_SINE * pieces.length[i] * pieces.length[j];
}

/**
 * Whether a place s on piece i faces piece j: no nearer place lies next to it on one of j's neighbours, and it does not look
 * along its own strip at a square end that stands in it. The answer changes only at `cuts`.
 */
function facingTest(
  { chip }: FindingContext,
  pieces: Pieces,
  i: number,
  j: number,
): { readonly cuts: readonly number[]; readonly at: (s: number) => boolean } {
  const ux = (pieces.x2[i] - pieces.x1[i]) / pieces.length[i];
  const uy = (pieces.y2[i] - pieces.y1[i]) / pieces.length[i];
  const vx = (pieces.x2[j] - pieces.x1[j]) / pieces.length[j];
  const vy = (pieces.y2[j] - pieces.y1[j]) / pieces.length[j];
  const cuts: number[] = [];
  const start = sideOf(pieces.x1[j], pieces.y1[j], -vx, -vy, neighbour(pieces, j, -1));
  const end = sideOf(pieces.x2[j], pieces.y2[j], vx, vy, neighbour(pieces, j, 1));
  return { cuts, at: (s) => start(s) && end(s) };

  /** One end of j: out of it points (ox, oy), and its neighbour there goes on in its own direction. */
  function sideOf(x: number, y: number, ox: number, oy: number, next: number): (s: number) => boolean {
    const beyond = alongLine(x, y, ox, oy);
    if (next < 0) {
      const isInside = isInPieceStrip(pieces, i, x, y, chip.joinWithinMm, null);
      return (s) => !isInside || beyond(s) <= 0;
    }
    const sign = Math.hypot(pieces.x1[next] - x, pieces.y1[next] - y) < 1e-12 ? 1 : -1;
    const nx = (sign * (pieces.x2[next] - pieces.x1[next])) / pieces.length[next];
    const ny = (sign * (pieces.y2[next] - pieces.y1[next])) / pieces.length[next];
    const onNext = alongLine(x, y, nx, ny);
    return (s) => beyond(s) <= 0 || onNext(s) <= 0;
  }

  /** How far beyond (x, y) in a direction the place s lies; its change of sign is a cut. */
  function alongLine(x: number, y: number, dx: number, dy: number): (s: number) => number {
    const atStart = (pieces.x1[i] - x) * dx + (pieces.y1[i] - y) * dy;
    const slope = ux * dx + uy * dy;
    if (Math.abs(slope) > 1e-12) cuts.push(pieces.start[i] - atStart / slope);
    return (s) => atStart + slope * (s - pieces.start[i]);
  }
}

/** The piece before (−1) or after (1) on the centreline; −1 at an end. */
function neighbour(pieces: Pieces, j: number, step: 1 | -1): number {
  const c = pieces.centreline[j];
  const first = pieces.firstPiece[c];
  const count = pieces.firstPiece[c + 1] - first;
  if (pieces.centrelineClosed[c] === 1) return count > 1 ? first + ((j - first + step + count) % count) : -1;
  return j + step < first || j + step >= first + count ? -1 : j + step;
}
