import { isAbove, isBelow } from '../asked/within.ts';
import type { Network } from '../network/types.ts';
import { channelOf } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { gapToHole } from './painted.ts';
import { joinsOf } from './paths.ts';
import { lengthMeasure, toFinding } from './rule.ts';
import { endPlace } from './tips.ts';
import type { Finding } from './types.ts';
import { degreesText, distanceText } from './words.ts';

/** Butt caps leave a notch on the outside of a turn sharper than this. */
const NOTCH_TURN_RAD = (5 * Math.PI) / 180;

/** The throat that a notch leaves, in widths. */
const LEAST_THROAT = 0.9;

/**
 * Two strokes with butt caps that meet end to end at a turn: their flat ends leave a wedge open on the outside, and the duct
 * is only as wide there as from the inner corner to the tip of the wedge.
 */
export function notches(context: FindingContext): Finding[] {
  const findings: Finding[] = [];
  for (const sides of joinsOf(context)) {
    if (sides.length !== 2) continue;
    const one = flatEnd(context.network, sides[0]);
    const two = flatEnd(context.network, sides[1]);
    const notch = one === null || two === null ? null : notchOf(one, two);
    if (notch !== null && !isCovered(context, notch)) findings.push(toCornerNotch(notch));
  }
  return findings;
}

interface Point {
  readonly x: number;
  readonly y: number;
}

/** A flat end: its middle, and the unit vector into the channel. */
interface FlatEnd extends Point {
  readonly piece: number;
  readonly name: string;
  readonly half: number;
  readonly ux: number;
  readonly uy: number;
}

/** The end of a stroke at an arc's side; null when the arc does not stop at an end, or its cap is not flat. */
function flatEnd(network: Network, side: number): FlatEnd | null {
  const { chip, trace } = network;
  const { pieces } = trace.near;
  const slackMm = chip.joinWithinMm;
  const arc = side >> 1;
  const c = trace.arcCentreline[arc];
  const atStart = (side & 1) === 0;
  const end = 2 * c + (side & 1);
  const { name, linecap } = channelOf(network, c);
  if (pieces.centrelineClosed[c] === 1 || linecap !== 'butt') return null;
  const isEnd = atStart
    ? trace.arcFrom[arc] <= slackMm
    : trace.arcTo[arc] >= pieces.centrelineLength[c] - slackMm;
  if (!isEnd || trace.endLeftOutMm[end] > slackMm) return null;
  const { piece, x, y } = endPlace(network, end);
  const sign = (atStart ? 1 : -1) / pieces.length[piece];
  const ux = sign * (pieces.x2[piece] - pieces.x1[piece]);
  const uy = sign * (pieces.y2[piece] - pieces.y1[piece]);
  return { piece, name, half: pieces.half[piece], x, y, ux, uy };
}

/** What two flat ends leave open, and what is left of the channel there. */
interface Notch {
  readonly one: FlatEnd;
  readonly two: FlatEnd;
  readonly turnRad: number;
  /** Innermost point of the wedge, and the inner corner opposite. */
  readonly tip: Point;
  readonly inner: Point;
  readonly throatMm: number;
  readonly widthMm: number;
}

function notchOf(one: FlatEnd, two: FlatEnd): Notch | null {
  const cross = one.ux * two.uy - one.uy * two.ux;
  const turnRad = Math.PI - Math.abs(Math.atan2(cross, one.ux * two.ux + one.uy * two.uy));
  if (!isAbove(turnRad, NOTCH_TURN_RAD)) return null;
  // Flat ends: the lines through the end points across the channels. Inner walls: half a width to the inner side.
  const tip = crossing(one, -one.uy, one.ux, two, -two.uy, two.ux);
  const side = Math.sign(cross);
  const wallOne = { x: one.x - side * one.uy * one.half, y: one.y + side * one.ux * one.half };
  const wallTwo = { x: two.x + side * two.uy * two.half, y: two.y - side * two.ux * two.half };
  const inner = crossing(wallOne, one.ux, one.uy, wallTwo, two.ux, two.uy);
  if (tip === null || inner === null) return null;
  if (apart(tip, one) >= one.half || apart(tip, two) >= two.half) return null;
  const throatMm = apart(tip, inner);
  const widthMm = 2 * Math.min(one.half, two.half);
  if (!isBelow(throatMm, LEAST_THROAT * widthMm)) return null;
  return { one, two, turnRad, tip, inner, throatMm, widthMm };
}

function apart(one: Point, two: Point): number {
  return Math.hypot(one.x - two.x, one.y - two.y);
}

/** Where the line through p along (ux, uy) crosses that through q along (vx, vy); null when they are parallel. */
function crossing(p: Point, ux: number, uy: number, q: Point, vx: number, vy: number): Point | null {
  const cross = ux * vy - uy * vx;
  if (Math.abs(cross) < 1e-12) return null;
  const t = ((q.x - p.x) * vy - (q.y - p.y) * vx) / cross;
  return { x: p.x + t * ux, y: p.y + t * uy };
}

/** Whether some other stroke is painted over the notch. */
function isCovered({ chip, network }: FindingContext, { one, two, tip }: Notch): boolean {
  const { pieces, index } = network.trace.near;
  const outX = -(one.ux + two.ux);
  const outY = -(one.uy + two.uy);
  const length = Math.hypot(outX, outY);
  if (length === 0) return false;
  const step = Math.min(one.half, two.half) / 4 / length;
  const x = tip.x + outX * step;
  const y = tip.y + outY * step;
  const plane = pieces.plane[one.piece];
  return index
    .search(x, y, x, y, (i) => i !== one.piece && i !== two.piece && pieces.plane[i] === plane)
    .some((i) => gapToHole(chip, pieces, i, { xMm: x, yMm: y, radiusMm: 0 }).distanceMm <= 0);
}

function toCornerNotch({ one, two, turnRad, tip, inner, throatMm, widthMm }: Notch): Finding {
  const names = [...new Set([two.name, one.name])];
  const which = names.length === 1 ? `two ends of ${names[0]}` : `${names[0]} and ${names[1]}`;
  return toFinding('corner-notch', 'caution', {
    message: `${which} meet with flat ends at a turn of ${degreesText(turnRad)} and leave a notch: the throat is ${distanceText(throatMm)}, the channel ${distanceText(widthMm)}`,
    fix: `draw ${which} as one stroke, or give the strokes round or square ends (stroke-linecap)`,
    at: { xMm: tip.x, yMm: tip.y },
    names,
    measure: lengthMeasure(throatMm, LEAST_THROAT * widthMm),
    mark: [inner.x, inner.y, tip.x, tip.y],
  });
}
