import { isAbove } from '../asked/within.ts';
import { placeOn } from '../geometry/on-piece.ts';
import { directionOf, type Pieces } from '../geometry/pieces.ts';
import { closestPoints, type Place, pointLine, stretchWithin } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { onlyGrows } from './growth.ts';
import { endMeets } from './meets.ts';
import { lineOf } from './painted.ts';
import { extentOf, type Facing, groupStretches, rangeOf } from './stretches.ts';

/** Two centrelines, or two stretches of one, drawn along each other as if they were one channel. */
interface DoubleStroke extends Place {
  /** Centrelines. */
  readonly a: number;
  readonly b: number;
  /** Extent on a, mm. */
  readonly from: number;
  readonly to: number;
  readonly limitMm: number;
  /** Largest distance of the two centrelines there, mm. */
  readonly apartMm: number;
}

/** Two strokes within this angle of each other run along each other. */
const ALONG_SINE = Math.sin((15 * Math.PI) / 180);

/** Far below anything drawn, far above rounding: nearer than this two centrelines are in one place. */
const SAME_PLACE_MM = 1e-6;

interface Sample {
  readonly s: number;
  readonly apart: number;
}

interface Along extends Facing {
  readonly i: number;
  /** How far the two are apart at positions on a, mm. */
  readonly samples: readonly Sample[];
  readonly narrowMm: number;
  readonly limitMm: number;
}

/** All double strokes of the drawing; cost linear in the near pairs. */
export const doubleStrokes = oncePerContext((context): readonly DoubleStroke[] => {
  const { pieces, pairCount, pairA, pairB, pairDistance } = context.network.trace.near;
  const found: Along[] = [];
  for (let k = 0; k < pairCount; k++) addAlong(found, pieces, pairA[k], pairB[k], pairDistance[k]);
  for (let i = 0; i + 1 < pieces.count; i++) {
    if (pieces.centreline[i] === pieces.centreline[i + 1]) addRetraced(found, pieces, i);
  }
  return groupStretches(found, ({ narrowMm }) => narrowMm).flatMap(
    (group) => toDoubleStroke(context, pieces, group) ?? [],
  );
});

function addAlong(into: Along[], pieces: Pieces, i: number, j: number, distanceMm: number): void {
  const narrowMm = 2 * Math.min(pieces.half[i], pieces.half[j]);
  const wideMm = 2 * Math.max(pieces.half[i], pieces.half[j]);
  const withinMm = (narrowMm / 2) * (1 + 1e-9);
  if (distanceMm > withinMm || isAbove(wideMm, 2 * narrowMm)) return;
  const one = lineOf(pieces, i);
  const two = lineOf(pieces, j);
  const [ux, uy] = directionOf(pieces, i);
  const [vx, vy] = directionOf(pieces, j);
  if (Math.abs(ux * vy - uy * vx) > ALONG_SINE * (1 + 1e-9)) return;
  const within = stretchWithin(one, two, withinMm);
  if (within === null) return;
  // Only where the second runs beside the first, not off its end.
  const slope = ux * vx + uy * vy;
  const offset = (one[0] - two[0]) * vx + (one[1] - two[1]) * vy;
  const atStart = -offset / slope;
  const atEnd = (pieces.length[j] - offset) / slope;
  const from = Math.max(within[0], Math.min(atStart, atEnd));
  const to = Math.min(within[1], Math.max(atStart, atEnd));
  if (to - from <= SAME_PLACE_MM) return;
  const sampleAt = (s: number): Sample => {
    const { distanceMm } = closestPoints(pointLine(one[0] + ux * s, one[1] + uy * s), two);
    return { s: pieces.start[i] + s, apart: distanceMm };
  };
  const closest = closestPoints(one, two);
  const leastAt = Math.min(to, Math.max(from, Math.hypot(closest.x1 - one[0], closest.y1 - one[1])));
  into.push({
    a: pieces.centreline[i],
    b: pieces.centreline[j],
    i,
    from: pieces.start[i] + from,
    to: pieces.start[i] + to,
    otherFrom: pieces.start[j] + offset + slope * from,
    otherTo: pieces.start[j] + offset + slope * to,
    samples: [from, leastAt, to].map(sampleAt),
    narrowMm,
    limitMm: 2 * wideMm,
  });
}

/** A centreline that turns right round and goes back over itself: neighbours are in no list of near pairs. */
function addRetraced(into: Along[], pieces: Pieces, i: number): void {
  const j = i + 1;
  const [ax, ay, bx, by] = lineOf(pieces, i);
  const [, , cx, cy] = lineOf(pieces, j);
  const dot = (bx - ax) * (cx - bx) + (by - ay) * (cy - by);
  const cross = (bx - ax) * (cy - by) - (by - ay) * (cx - bx);
  if (dot >= 0 || Math.abs(cross) > 1e-9 * pieces.length[i] * pieces.length[j]) return;
  const length = Math.min(pieces.length[i], pieces.length[j]);
  const turn = pieces.start[j];
  into.push({
    a: pieces.centreline[i],
    b: pieces.centreline[j],
    i,
    from: turn - length,
    to: turn,
    otherFrom: turn + length,
    otherTo: turn,
    samples: [turn - length, turn].map((s) => ({ s, apart: 0 })),
    narrowMm: 2 * pieces.half[i],
    limitMm: 4 * pieces.half[i],
  });
}

/** The group as a double stroke; null when it is short, or nothing but two channels that cross or part. */
function toDoubleStroke(
  context: FindingContext,
  pieces: Pieces,
  group: readonly Along[],
): DoubleStroke | null {
  const { a, b, limitMm } = group[0];
  const { fromA, toA } = extentOf(group);
  if (!isAbove(toA - fromA, limitMm)) return null;
  const samples = group.flatMap((along) => along.samples);
  const { from, to } = withoutParting(context, group, samples);
  if (!isAbove(to - from, limitMm)) return null;
  const middle = (from + to) / 2;
  const at = group.find((along) => along.to >= middle) ?? group[0];
  const share = (Math.min(at.to, Math.max(at.from, middle)) - pieces.start[at.i]) / pieces.length[at.i];
  const { x, y } = placeOn(pieces, at.i, share);
  const apartMm = samples.reduce(
    (most, { s, apart }) => (s >= from && s <= to ? Math.max(most, apart) : most),
    0,
  );
  return { a, b, from, to, limitMm, apartMm, xMm: x, yMm: y };
}

/** The stretch on a, less what lies before and behind the places where the two meet if they only move apart there. */
function withoutParting(
  { chip, network }: FindingContext,
  group: readonly Along[],
  samples: readonly Sample[],
) {
  const slack = chip.joinWithinMm;
  const { pieces } = network.trace.near;
  const [{ a, b, limitMm }] = group;
  const { fromA, toA, fromB, toB } = extentOf(group);
  const within = (apartMm: number): number[] =>
    samples.filter(({ apart }) => apart <= apartMm).map(({ s }) => s);
  // Else drawn to meet, but for the rounding of coordinates.
  const meets = [within(SAME_PLACE_MM), joinedEnds(), within(slack)].find(({ length }) => length > 0);
  if (meets === undefined) return { from: fromA, to: toA };
  const [first, last] = rangeOf(meets);
  const after = samples.filter(({ s }) => s >= last).map(({ s, apart }) => ({ way: s - last, apart }));
  const before = samples.filter(({ s }) => s <= first).map(({ s, apart }) => ({ way: first - s, apart }));
  const partsAfter = !endsThere(toA) && onlyGrows(after, limitMm, slack);
  const partsBefore = !endsThere(fromA) && onlyGrows(before, limitMm, slack);
  return { from: partsBefore ? first : fromA, to: partsAfter ? last : toA };

  /** Positions on a of ends of either stroke that were carried on to the other: they meet in a node there. */
  function joinedEnds(): number[] {
    const isJoined = (c: number, other: number, position: number): boolean =>
      (position <= slack && endMeets(network, 2 * c, other)) ||
      (position >= pieces.centrelineLength[c] - slack && endMeets(network, 2 * c + 1, other));
    return group
      .flatMap(({ from, to, otherFrom, otherTo }) => [
        [from, otherFrom],
        [to, otherTo],
      ])
      .filter(([s, t]) => isJoined(a, b, s) || isJoined(b, a, t))
      .map(([s]) => s);
  }

  /** Whether the stretch stops at s because one of the two strokes ends there, not because they part. */
  function endsThere(s: number): boolean {
    const isEnd = (c: number, position: number): boolean =>
      pieces.centrelineClosed[c] === 0 &&
      (position <= slack || position >= pieces.centrelineLength[c] - slack);
    if (isEnd(a, s)) return true;
    const facing = group.find(({ from, to }) => Math.abs(from - s) <= slack || Math.abs(to - s) <= slack);
    if (facing === undefined) return false;
    const other = Math.abs(facing.to - s) <= slack ? facing.otherTo : facing.otherFrom;
    return isEnd(b, other) && (other - fromB <= slack || toB - other <= slack);
  }
}
