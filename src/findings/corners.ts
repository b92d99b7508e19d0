import { formatNumber } from '../runsheet/shown.ts';
import type { FindingContext } from './context.ts';
import { gapToHole } from './painted.ts';
import { channelPaths, pointOn } from './paths.ts';
import { found, isAbove, isBelow, limitRule, type Rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText } from './words.ts';

/** Corners and bends: places where material or mask runs to a point, and where a duct is no longer one. */
export const cornerRules: readonly Rule[] = [
  limitRule(
    'sharp-corner',
    'min_corner_angle',
    ({ run }) => run.limits.minCornerAngleRad,
    (context, limit) => {
      const faults = [...cornersAtVertices(context, limit.value), ...cornersOfLines(context, limit.value)];
      return faults.map(({ angleRad, xMm, yMm, names }) => {
        const between = names.length === 1 ? `${names[0]} turns` : `${names[0]} and ${names[1]} meet`;
        return toFinding('sharp-corner', 'caution', {
          message: `${between} at an inside angle of ${degrees(angleRad)}; min_corner_angle is ${limitText(degrees(limit.value), limit)}: the material between runs to a point`,
          fix:
            names.length === 1
              ? `round the corner of ${names[0]}, or open it by ${degrees(limit.value - angleRad)}`
              : `turn ${names[0]} ${degrees(limit.value - angleRad)} away from ${names[1]}`,
          at: { xMm, yMm },
          names,
          measure: { value: angleRad, limit: limit.value, unit: 'rad' },
        });
      });
    },
  ),
  { names: ['corner-notch'], run: (context) => found(notches(context)) },
  { names: ['tight-bend'], run: (context) => found(tightBends(context)) },
];

function degrees(rad: number): string {
  return `${formatNumber((rad * 180) / Math.PI)}°`;
}

interface Corner {
  readonly angleRad: number;
  readonly xMm: number;
  readonly yMm: number;
  readonly names: readonly string[];
}

/** One corner per node that is no port: the sharpest angle between channels that leave it. */
function cornersAtVertices(context: FindingContext, limitRad: number): Corner[] {
  const { chip, network } = context;
  const { trace } = network;
  const { pieces } = trace.near;
  const paths = channelPaths(context);
  const corners: Corner[] = [];
  for (let v = 0; v < paths.vertexCount; v++) {
    if (v < network.nodeCount && network.nodePort[v] >= 0) continue;
    const first = paths.firstSide[v];
    const count = paths.firstSide[v + 1] - first;
    if (count < 2) continue;
    const arms = Array.from(paths.sides.subarray(first, first + count), (side) => armOf(context, side)).sort(
      (p, q) => p.angle - q.angle || p.side - q.side,
    );
    let sharpest = Number.POSITIVE_INFINITY;
    let at = 0;
    for (let k = 0; k < count; k++) {
      const next = arms[(k + 1) % count];
      const turn = next.angle - arms[k].angle + (k + 1 === count ? 2 * Math.PI : 0);
      if (turn < sharpest) {
        sharpest = turn;
        at = k;
      }
    }
    if (!isBelow(sharpest, limitRad)) continue;
    const channels = [arms[at], arms[(at + 1) % count]]
      .map(({ side }) => pieces.centrelineChannel[trace.arcCentreline[side >> 1]])
      .sort((p, q) => q - p);
    corners.push({
      angleRad: sharpest,
      xMm: arms[at].x,
      yMm: arms[at].y,
      names: [...new Set(channels.map((channel) => chip.channels[channel].name))],
    });
  }
  return corners;
}

interface Arm {
  readonly side: number;
  /** Direction in which it leaves, rad. */
  readonly angle: number;
  readonly x: number;
  readonly y: number;
}

/** The direction in which an arc leaves its node: as drawn, over its first half width. */
function armOf({ network }: FindingContext, side: number): Arm {
  const { trace } = network;
  const { pieces } = trace.near;
  const arc = side >> 1;
  const c = trace.arcCentreline[arc];
  const atStart = (side & 1) === 0;
  const from = Math.max(0, trace.arcFrom[arc]);
  const to = Math.min(pieces.centrelineLength[c], trace.arcTo[arc]);
  const span = Math.min(to - from, pieces.half[pieces.firstPiece[c]]);
  const near = atStart ? from : to;
  const [x, y] = pointOn(network, c, near);
  const [x2, y2] = pointOn(network, c, atStart ? near + span : near - span);
  const [nodeX, nodeY] = pointOn(network, c, atStart ? trace.arcFrom[arc] : trace.arcTo[arc]);
  return { side, angle: Math.atan2(y2 - y, x2 - x), x: nodeX, y: nodeY };
}

/** Chords of a curve turn by less than this; a corner between two of them is a cusp. */
const CURVE_TURN_RAD = Math.PI / 6;

/** Corners of the polylines themselves, between nodes. */
function cornersOfLines(context: FindingContext, limitRad: number): Corner[] {
  const { chip, network } = context;
  const { trace } = network;
  const { pieces } = trace.near;
  const paths = channelPaths(context);
  const corners: Corner[] = [];
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const first = pieces.firstPiece[c];
    const end = pieces.firstPiece[c + 1];
    // Where a closed channel begins is a vertex of its own.
    for (let i = first; i + 1 < end; i++) {
      const j = i + 1;
      const ux = pieces.x1[i] - pieces.x2[i];
      const uy = pieces.y1[i] - pieces.y2[i];
      const vx = pieces.x2[j] - pieces.x1[j];
      const vy = pieces.y2[j] - pieces.y1[j];
      const angleRad = Math.abs(Math.atan2(ux * vy - uy * vx, ux * vx + uy * vy));
      if (!isBelow(angleRad, limitRad)) continue;
      if (pieces.bendRadius[i] > 0 && pieces.bendRadius[j] > 0 && Math.PI - angleRad < CURVE_TURN_RAD)
        continue;
      const s = pieces.start[j];
      if (paths.isInWell(c, s) || isNode(c, s)) continue;
      corners.push({
        angleRad,
        xMm: pieces.x1[j],
        yMm: pieces.y1[j],
        names: [chip.channels[pieces.channel[i]].name],
      });
    }
  }
  return corners;

  /** Whether a node stands there (its arms are looked at together), or the place was left out. */
  function isNode(c: number, s: number): boolean {
    const arc = paths.arcAt(c, s);
    if (arc < 0) return true;
    return s <= trace.arcFrom[arc] + chip.joinWithinMm || s >= trace.arcTo[arc] - chip.joinWithinMm;
  }
}

/** Butt caps leave a notch on the outside of a turn sharper than this. */
const NOTCH_TURN_RAD = (5 * Math.PI) / 180;

/** The throat that a notch leaves, in widths. */
const LEAST_THROAT = 0.9;

/**
 * Two strokes with butt caps that meet end to end at a turn: their flat ends leave a wedge open on the outside, and the duct
 * is only as wide there as from the inner corner to the tip of the wedge.
 */
function notches(context: FindingContext): Finding[] {
  const { chip, network } = context;
  const { trace } = network;
  const { pieces } = trace.near;
  const paths = channelPaths(context);
  const findings: Finding[] = [];
  for (let v = 0; v < paths.vertexCount; v++) {
    if (v < network.nodeCount && network.nodePort[v] >= 0) continue;
    const first = paths.firstSide[v];
    if (paths.firstSide[v + 1] - first !== 2) continue;
    const one = flatEnd(paths.sides[first]);
    const two = flatEnd(paths.sides[first + 1]);
    if (one === null || two === null) continue;
    const turn =
      Math.PI - Math.abs(Math.atan2(one.ux * two.uy - one.uy * two.ux, one.ux * two.ux + one.uy * two.uy));
    if (!isAbove(turn, NOTCH_TURN_RAD)) continue;
    // Flat ends: the lines through the end points across the channels. Inner walls: half a width to the inner side.
    const tip = crossing(one.x, one.y, -one.uy, one.ux, two.x, two.y, -two.uy, two.ux);
    const sideOne = Math.sign(one.ux * two.uy - one.uy * two.ux);
    const inner = crossing(
      one.x - sideOne * one.uy * one.half,
      one.y + sideOne * one.ux * one.half,
      one.ux,
      one.uy,
      two.x + sideOne * two.uy * two.half,
      two.y - sideOne * two.ux * two.half,
      two.ux,
      two.uy,
    );
    if (tip === null || inner === null) continue;
    if (
      Math.hypot(tip.x - one.x, tip.y - one.y) >= one.half ||
      Math.hypot(tip.x - two.x, tip.y - two.y) >= two.half
    )
      continue;
    const throatMm = Math.hypot(tip.x - inner.x, tip.y - inner.y);
    const widthMm = 2 * Math.min(one.half, two.half);
    const limitMm = LEAST_THROAT * widthMm;
    if (!isBelow(throatMm, limitMm) || isCovered(tip, one, two)) continue;
    const names = [...new Set([two.name, one.name])];
    const which = names.length === 1 ? `two ends of ${names[0]}` : `${names[0]} and ${names[1]}`;
    findings.push(
      toFinding('corner-notch', 'caution', {
        message: `${which} meet with flat ends at a turn of ${degrees(turn)} and leave a notch: the throat is ${distanceText(throatMm)}, the channel ${distanceText(widthMm)}`,
        fix: `draw ${which} as one stroke, or give the strokes round or square ends (stroke-linecap)`,
        at: { xMm: tip.x, yMm: tip.y },
        names,
        measure: { value: throatMm / 1e3, limit: limitMm / 1e3, unit: 'm' },
        mark: { x1Mm: inner.x, y1Mm: inner.y, x2Mm: tip.x, y2Mm: tip.y },
      }),
    );
  }
  return findings;

  /** The end of a stroke at an arc's side; null when the arc does not stop at an end, or its cap is not flat. */
  function flatEnd(side: number): FlatEnd | null {
    const arc = side >> 1;
    const c = trace.arcCentreline[arc];
    const atStart = (side & 1) === 0;
    const end = 2 * c + (atStart ? 0 : 1);
    const channel = chip.channels[pieces.centrelineChannel[c]];
    if (pieces.centrelineClosed[c] === 1 || channel.linecap !== 'butt') return null;
    const isEnd = atStart
      ? trace.arcFrom[arc] <= chip.joinWithinMm
      : trace.arcTo[arc] >= pieces.centrelineLength[c] - chip.joinWithinMm;
    if (!isEnd || trace.endLeftOutMm[end] > chip.joinWithinMm) return null;
    const piece = atStart ? pieces.firstPiece[c] : pieces.firstPiece[c + 1] - 1;
    const sign = (atStart ? 1 : -1) / pieces.length[piece];
    return {
      piece,
      name: channel.name,
      half: pieces.half[piece],
      x: atStart ? pieces.x1[piece] : pieces.x2[piece],
      y: atStart ? pieces.y1[piece] : pieces.y2[piece],
      ux: sign * (pieces.x2[piece] - pieces.x1[piece]),
      uy: sign * (pieces.y2[piece] - pieces.y1[piece]),
    };
  }

  /** Whether some other stroke is painted over the notch. */
  function isCovered(tip: Point, one: FlatEnd, two: FlatEnd): boolean {
    const outX = -(one.ux + two.ux);
    const outY = -(one.uy + two.uy);
    const length = Math.hypot(outX, outY);
    if (length === 0) return false;
    const step = Math.min(one.half, two.half) / 4 / length;
    const x = tip.x + outX * step;
    const y = tip.y + outY * step;
    const plane = pieces.plane[one.piece];
    const over = trace.near.index.search(x, y, x, y, (i) => {
      if (i === one.piece || i === two.piece || pieces.plane[i] !== plane) return false;
      return gapToHole(chip, pieces, i, { xMm: x, yMm: y, radiusMm: 0 }).distanceMm <= 0;
    });
    return over.length > 0;
  }
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

function crossing(
  px: number,
  py: number,
  ux: number,
  uy: number,
  qx: number,
  qy: number,
  vx: number,
  vy: number,
): Point | null {
  const cross = ux * vy - uy * vx;
  if (Math.abs(cross) < 1e-12) return null;
  const t = ((qx - px) * vy - (qy - py) * vx) / cross;
  return { x: px + t * ux, y: py + t * uy };
}

/** A curve that turns by less than this is a joggle of the drawing, whatever its radius. */
const LEAST_BEND_RAD = (15 * Math.PI) / 180;

/** One finding for each run of a curve whose radius is below the channel's width. */
function tightBends(context: FindingContext): Finding[] {
  const { chip, network } = context;
  const { pieces } = network.trace.near;
  const paths = channelPaths(context);
  const findings: Finding[] = [];
  for (let i = 0; i < pieces.count; ) {
    if (!isTight(i)) {
      i++;
      continue;
    }
    const c = pieces.centreline[i];
    let tightest = i;
    let turnRad = 0;
    let last = i;
    for (; last < pieces.firstPiece[c + 1] && isTight(last); last++) {
      turnRad += pieces.length[last] / pieces.bendRadius[last];
      if (pieces.bendRadius[last] < pieces.bendRadius[tightest] * (1 - 1e-6)) tightest = last;
    }
    const even = [];
    for (let k = i; k < last; k++) {
      if (pieces.bendRadius[k] <= pieces.bendRadius[tightest] * (1 + 1e-6)) even.push(k);
    }
    const at = even[even.length >> 1];
    i = last;
    if (turnRad < LEAST_BEND_RAD) continue;
    const radiusMm = pieces.bendRadius[at];
    const widthMm = 2 * pieces.half[at];
    const { name } = chip.channels[pieces.channel[at]];
    const folds = isBelow(radiusMm, widthMm / 2);
    findings.push(
      toFinding('tight-bend', folds ? 'blocker' : 'caution', {
        message: `${name} bends with a radius of ${distanceText(radiusMm)} and is ${distanceText(widthMm)} wide${folds ? ': its inner wall folds over itself' : ''}`,
        fix: `give the bend a radius of ${distanceText(widthMm)} or more${folds ? '' : ', or draw a mitred corner'}`,
        at: { xMm: (pieces.x1[at] + pieces.x2[at]) / 2, yMm: (pieces.y1[at] + pieces.y2[at]) / 2 },
        names: [name],
        measure: { value: radiusMm / 1e3, limit: widthMm / 1e3, unit: 'm' },
      }),
    );
  }
  return findings;

  function isTight(i: number): boolean {
    const radius = pieces.bendRadius[i];
    return (
      radius > 0 &&
      isBelow(radius, 2 * pieces.half[i]) &&
      !paths.isInWell(pieces.centreline[i], pieces.start[i] + pieces.length[i] / 2)
    );
  }
}
