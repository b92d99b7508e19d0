import { isBelow } from '../asked/within.ts';
import type { Sourced } from '../chip/types.ts';
import type { Network } from '../network/types.ts';
import { tightBends } from './bends.ts';
import type { Place } from './closest.ts';
import type { FindingContext } from './context.ts';
import { notches } from './notches.ts';
import { channelPaths, joinsOf, pointOn, sidePoint } from './paths.ts';
import { limitRule, type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { degreesText, limitText } from './words.ts';

/** Corners and bends: places where material or mask runs to a point, and where a duct is no longer one. */
export const cornerRules: readonly Rule[] = [
  limitRule('sharp-corner', 'min_corner_angle', 'minCornerAngleRad', (context, limit) =>
    [...cornersAtVertices(context, limit.value), ...cornersOfLines(context, limit.value)].map((corner) =>
      toSharpCorner(corner, limit),
    ),
  ),
  rule('corner-notch', notches),
  rule('tight-bend', tightBends),
];

function toSharpCorner(corner: Corner, limit: Sourced<number>): Finding {
  const { angleRad, names } = corner;
  const [one, two] = names;
  const more = degreesText(limit.value - angleRad);
  const [between, fix] =
    two === undefined
      ? [`${one} turns`, `round the corner of ${one}, or open it by ${more}`]
      : [`${one} and ${two} meet`, `turn ${one} ${more} away from ${two}`];
  return toFinding('sharp-corner', 'caution', {
    message: `${between} at an inside angle of ${degreesText(angleRad)}; min_corner_angle is ${limitText(degreesText(limit.value), limit)}: the material between runs to a point`,
    fix,
    at: corner,
    names,
    measure: { value: angleRad, limit: limit.value, unit: 'rad' },
  });
}

interface Corner extends Place {
  readonly angleRad: number;
  readonly names: readonly string[];
}

/** One corner per node that is no port: the sharpest angle between channels that leave it. */
function cornersAtVertices(context: FindingContext, limitRad: number): Corner[] {
  const { network } = context;
  const { near, arcCentreline } = network.trace;
  const corners: Corner[] = [];
  for (const sides of joinsOf(context)) {
    const arms = Array.from(sides, (side) => armOf(network, side)).sort(
      (p, q) => p.angle - q.angle || p.side - q.side,
    );
    let angleRad = Number.POSITIVE_INFINITY;
    let between: readonly [Arm, Arm] = [arms[0], arms[0]];
    arms.forEach((arm, k) => {
      const isLast = k + 1 === arms.length;
      const next = arms[isLast ? 0 : k + 1];
      const turn = next.angle - arm.angle + (isLast ? 2 * Math.PI : 0);
      if (turn >= angleRad) return;
      angleRad = turn;
      between = [arm, next];
    });
    if (!isBelow(angleRad, limitRad)) continue;
    const channels = between
      .map(({ side }) => near.pieces.centrelineChannel[arcCentreline[side >> 1]])
      .sort((p, q) => q - p);
    const names = [...new Set(channels.map((channel) => network.chip.channels[channel].name))];
    corners.push({ angleRad, xMm: between[0].x, yMm: between[0].y, names });
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
function armOf(network: Network, side: number): Arm {
  const { trace } = network;
  const { pieces } = trace.near;
  const arc = side >> 1;
  const c = trace.arcCentreline[arc];
  const atStart = (side & 1) === 0;
  const from = Math.max(0, trace.arcFrom[arc]);
  const to = Math.min(pieces.centrelineLength[c], trace.arcTo[arc]);
  const span = Math.min(to - from, pieces.half[pieces.firstPiece[c]]);
  const near = atStart ? from : to;
  const [x1, y1] = pointOn(network, c, near);
  const [x2, y2] = pointOn(network, c, atStart ? near + span : near - span);
  const [x, y] = sidePoint(network, side);
  return { side, angle: Math.atan2(y2 - y1, x2 - x1), x, y };
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
      const isCurve = pieces.bendRadius[i] > 0 && pieces.bendRadius[j] > 0;
      if (isCurve && Math.PI - angleRad < CURVE_TURN_RAD) continue;
      const s = pieces.start[j];
      if (paths.isInWell(c, s) || isNode(c, s)) continue;
      const names = [chip.channels[pieces.channel[i]].name];
      corners.push({ angleRad, xMm: pieces.x1[j], yMm: pieces.y1[j], names });
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
