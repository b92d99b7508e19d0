import { placeOn } from '../geometry/on-piece.ts';
import { directionOf, type Pieces } from '../geometry/pieces.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { closestPoints } from './closest.ts';
import type { FindingContext } from './context.ts';
import { endMeets } from './meets.ts';
import { lineOf } from './painted.ts';
import { channelPaths } from './paths.ts';
import { endPlace } from './tips.ts';

/** Whether two pieces that overlap share a node there: nearly always where they are nearest. */
export function meetInNode(context: FindingContext, i: number, j: number): boolean {
  const { pieces } = context.network.trace.near;
  const { start, length } = pieces;
  const { x1, y1, x2, y2 } = closestPoints(lineOf(pieces, i), lineOf(pieces, j));
  const s = start[i] + Math.hypot(x1 - pieces.x1[i], y1 - pieces.y1[i]);
  const t = start[j] + Math.hypot(x2 - pieces.x1[j], y2 - pieces.y1[j]);
  return (
    meetBetween(context, i, s, s, j) ||
    meetBetween(context, j, t, t, i) ||
    meetBetween(context, i, start[i], start[i] + length[i], j) ||
    meetBetween(context, j, start[j], start[j] + length[j], i)
  );
}

/**
 * Whether a node on piece i between two positions lies inside the strip of piece j and has a place on j's centreline
 * near there. An end that was carried on stands where it was drawn.
 */
function meetBetween(context: FindingContext, i: number, from: number, to: number, j: number): boolean {
  const { pieces } = context.network.trace.near;
  const slackMm = context.chip.joinWithinMm;
  const c = pieces.centreline[i];
  const low = from <= slackMm ? Number.NEGATIVE_INFINITY : from - slackMm;
  const high = to >= pieces.centrelineLength[c] - slackMm ? Number.POSITIVE_INFINITY : to + slackMm;
  return someSide(context, c, low, high, (side, s) => meetAtSide(context, side, s, i, j));
}

function meetAtSide(context: FindingContext, side: number, s: number, i: number, j: number): boolean {
  const { pieces } = context.network.trace.near;
  const slackMm = context.chip.joinWithinMm;
  const along = Math.min(pieces.centrelineLength[pieces.centreline[i]], Math.max(0, s)) - pieces.start[i];
  if (along < -slackMm || along > pieces.length[i] + slackMm) return false;
  const { x, y } = placeOn(pieces, i, along / pieces.length[i]);
  if (!isInPieceStrip(pieces, j, x, y, slackMm, null)) return false;
  const t = pieces.start[j] + alongPiece(pieces, j, x, y);
  const nearMm = 4 * (pieces.half[i] + pieces.half[j]);
  // Rule 7 takes away nodes where two arcs of one reach meet: these are vertices all the same.
  const { sideVertex } = channelPaths(context);
  const isSame = (other: number): boolean => other !== side && sideVertex[other] === sideVertex[side];
  return someSide(context, pieces.centreline[j], t - nearMm, t + nearMm, isSame);
}

/** Whether a test holds for some side of an arc that lies between two positions of a centreline. */
function someSide(
  { network }: FindingContext,
  c: number,
  low: number,
  high: number,
  test: (side: number, s: number) => boolean,
): boolean {
  const { firstArc, arcFrom, arcTo } = network.trace;
  let a = firstArc[c];
  for (let end = firstArc[c + 1]; a < end; ) {
    const middle = (a + end) >> 1;
    if (arcTo[middle] < low) a = middle + 1;
    else end = middle;
  }
  for (; a < firstArc[c + 1] && arcFrom[a] <= high; a++) {
    if (arcFrom[a] >= low && test(2 * a, arcFrom[a])) return true;
    if (arcTo[a] <= high && test(2 * a + 1, arcTo[a])) return true;
  }
  return false;
}

/** Whether piece i is of a stroke that the joining rules left out whole, which has no node, and was to be carried on to piece j. */
export function isLeftOutOn({ chip, network }: FindingContext, i: number, j: number): boolean {
  const { near, firstArc } = network.trace;
  const { pieces } = near;
  const c = pieces.centreline[i];
  if (firstArc[c + 1] > firstArc[c]) return false;
  return [2 * c, 2 * c + 1].some((end) => {
    const { piece, x, y } = endPlace(network, end);
    return (
      piece === i &&
      endMeets(network, end, pieces.centreline[j]) &&
      isInPieceStrip(pieces, j, x, y, chip.joinWithinMm, null)
    );
  });
}

/** Distance along a piece, within it, of the place nearest to a point. */
export function alongPiece(pieces: Pieces, i: number, x: number, y: number): number {
  const [dx, dy] = directionOf(pieces, i);
  return Math.min(pieces.length[i], Math.max(0, (x - pieces.x1[i]) * dx + (y - pieces.y1[i]) * dy));
}
