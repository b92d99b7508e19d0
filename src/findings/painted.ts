import type { Chip } from '../chip/types.ts';
import { FINE_MM, finePieces } from '../geometry/curve.ts';
import { endsAtVertex, type Pieces, startsAtVertex } from '../geometry/pieces.ts';
import { ROUND, type Rounding, turnOf } from '../geometry/rounding.ts';
import { isNextToCurvedEnd, roundingAt } from '../geometry/strip.ts';
import type { Network } from '../network/types.ts';
import { type Closest, closestPoints, type Line, nearer } from './closest.ts';
import { endPlace } from './tips.ts';

/**
 * The painted stroke, caps included: what is etched. Piece by piece it is a rectangle along the piece and a disc at each
 * inner vertex and round cap; butt caps end square, square caps half a width further on.
 */

/** Lines with all that lies within a radius of them; an area when it has corners. */
export interface Painted {
  readonly lines: readonly Line[];
  readonly radius: number;
  /** Corners of a filled convex area whose sides `lines` are; null for lines. */
  readonly corners: readonly (readonly [number, number])[] | null;
}

type Round = { readonly xMm: number; readonly yMm: number; readonly radiusMm: number };

/**
 * Material between the painted areas of two pieces (mm), and the two wall points that face each other there. Where the
 * areas overlap it is negative, by how far: the distance of the centrelines less both halves.
 */
export function gapBetween(chip: Chip, pieces: Pieces, i: number, j: number): Closest {
  const gap = leastOf(paintedParts(chip, pieces, i), paintedParts(chip, pieces, j), gapOf);
  if (gap.distanceMm > 0) return gap;
  const overlap = leastOf(linesOf(pieces, i), linesOf(pieces, j), closestPoints);
  return { ...overlap, distanceMm: Math.min(0, overlap.distanceMm - pieces.half[i] - pieces.half[j]) };
}

/** Material between the painted area of a piece and another one, as of an end (mm); negative where they overlap. */
export function gapTo(chip: Chip, pieces: Pieces, i: number, other: Painted): Closest {
  return leastOf(paintedParts(chip, pieces, i), [other], gapOf);
}

/** Material between the painted area of a piece and a round hole (mm); negative where they overlap. */
export function gapToHole(chip: Chip, pieces: Pieces, i: number, hole: Round): Closest {
  return gapTo(chip, pieces, i, paintedHole(hole));
}

export function paintedHole({ xMm, yMm, radiusMm }: Round): Painted {
  return disc(xMm, yMm, radiusMm);
}

/** What a channel's end paints: a straight face across it, or, with a round cap, a disc round the end point. */
export function paintedEnd(network: Network, end: number): Painted {
  const { pieces } = network.trace.near;
  const { piece, x, y, outX, outY } = endPlace(network, end);
  const half = pieces.half[piece];
  const { linecap } = network.chip.channels[pieces.channel[piece]];
  if (linecap === 'round') return disc(x, y, half);
  const face = faceOf({ x, y, outX, outY, beyondMm: linecap === 'square' ? half : 0, round: null }, half);
  return { lines: [face], radius: 0, corners: null };
}

/** True where a piece has an end that is cut flat, or is next to one on a curve, so that its painted area is not just all within half a width of it. */
export function hasFlatEnd(chip: Chip, pieces: Pieces, i: number): boolean {
  const { linecap } = chip.channels[pieces.channel[i]];
  if (linecap === 'round') return false;
  if (!startsAtVertex(pieces, i) || !endsAtVertex(pieces, i)) return true;
  return linecap === 'butt' && (isNextToCurvedEnd(pieces, i) || sectorsOf(pieces, i).some(isSector));
}

export function lineOf(pieces: Pieces, i: number): Line {
  return [pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i]];
}

/** The piece as straight lines that its curve departs from by no more than FINE_MM. */
function linesOf(pieces: Pieces, i: number): readonly Line[] {
  const curve = pieces.curves.get(i);
  if (curve === undefined) return [lineOf(pieces, i)];
  let x = pieces.x1[i];
  let y = pieces.y1[i];
  return finePieces(curve, FINE_MM).map((fine): Line => {
    const line: Line = [x, y, fine.x, fine.y];
    x = fine.x;
    y = fine.y;
    return line;
  });
}

/** The painted area of a piece; at least one part. */
export function paintedParts(chip: Chip, pieces: Pieces, i: number): Painted[] {
  const { linecap } = chip.channels[pieces.channel[i]];
  const half = pieces.half[i];
  const flatStart = linecap !== 'round' && !startsAtVertex(pieces, i);
  const flatEnd = linecap !== 'round' && !endsAtVertex(pieces, i);
  const lines = linesOf(pieces, i);
  // Next to a flat end on a curve round ends would reach beyond it: what they would fill is less than 0.1 µm.
  const isPlain = linecap === 'butt' && isNextToCurvedEnd(pieces, i);
  // A square cap reaches beyond any round that stands less than half a width before it.
  const [atStart, atEnd]: readonly (Rounding | null)[] =
    linecap === 'butt' ? sectorsOf(pieces, i) : [ROUND, ROUND];
  const isWhole = !flatStart && !flatEnd && !isPlain && !isSector(atStart) && !isSector(atEnd);
  if (isWhole) return [{ lines, radius: half, corners: null }];
  const beyondMm = linecap === 'square' ? half : 0;
  const flatAt = (end: number, x: number, y: number): LineEnd => {
    return { x, y, outX: pieces.outX[end], outY: pieces.outY[end], beyondMm, round: null };
  };
  const c = pieces.centreline[i];
  return lines.flatMap((line, k) => {
    const [ax, ay, bx, by] = line;
    const isFirst = k === 0;
    const isLast = k === lines.length - 1;
    const length = Math.hypot(bx - ax, by - ay);
    const [ux, uy] = [(bx - ax) / length, (by - ay) / length];
    const roundStart = isPlain ? null : isFirst ? atStart : ROUND;
    const roundEnd = isPlain ? null : isLast ? atEnd : ROUND;
    const start =
      isFirst && flatStart
        ? flatAt(2 * c, ax, ay)
        : { x: ax, y: ay, outX: -ux, outY: -uy, beyondMm: 0, round: roundStart };
    const end =
      isLast && flatEnd
        ? flatAt(2 * c + 1, bx, by)
        : { x: bx, y: by, outX: ux, outY: uy, beyondMm: 0, round: roundEnd };
    if (start.round === ROUND && end.round === ROUND) return [{ lines: [line], radius: half, corners: null }];
    return partsBetween(start, end, half);
  });
}

/** One end of a straight line, the direction out of it, and the round there; flat, so far beyond it, where there is none. */
interface LineEnd {
  readonly x: number;
  readonly y: number;
  readonly outX: number;
  readonly outY: number;
  readonly beyondMm: number;
  readonly round: Rounding | null;
}

/** The straight face of an end across the line. */
function faceOf({ x, y, outX, outY, beyondMm }: LineEnd, half: number): Line {
  const cx = x + outX * beyondMm;
  const cy = y + outY * beyondMm;
  return [cx - outY * half, cy + outX * half, cx + outY * half, cy - outX * half];
}

function partsBetween(start: LineEnd, end: LineEnd, half: number): Painted[] {
  const [px, py, qx, qy] = faceOf(start, half);
  const [rx, ry, sx, sy] = faceOf(end, half);
  const area = areaOf([
    [qx, qy],
    [rx, ry],
    [sx, sy],
    [px, py],
  ]);
  return [area, ...roundAt(start, half), ...roundAt(end, half)];
}

function roundAt({ x, y, outX: ux, outY: uy, round }: LineEnd, half: number): Painted[] {
  if (round === null) return [];
  if (round === ROUND) return [disc(x, y, half)];
  const { angle, side } = turnOf(ux, uy, round);
  const count = Math.ceil(angle / 2 / Math.acos(Math.max(0.5, 1 - FINE_MM / half)));
  if (count === 0) return [];
  const corners: [number, number][] = [[x, y]];
  for (let k = 0; k <= count; k++) {
    const turned = (angle * k) / count;
    const along = half * Math.sin(turned);
    const across = side * half * Math.cos(turned);
    corners.push([x + along * ux - across * uy, y + along * uy + across * ux]);
  }
  return [areaOf(corners)];
}

function areaOf(corners: readonly (readonly [number, number])[]): Painted {
  const lines = corners.map(([x, y], k): Line => [x, y, ...corners[(k + 1) % corners.length]]);
  return { lines, radius: 0, corners };
}

/** How the strip of a piece goes on at its two ends. */
function sectorsOf(pieces: Pieces, i: number): readonly (Rounding | null)[] {
  return [roundingAt(pieces, i, -1, null, 0), roundingAt(pieces, i, 1, null, 0)];
}

function isSector(rounding: Rounding | null): boolean {
  return rounding !== null && rounding !== ROUND;
}

function disc(x: number, y: number, radius: number): Painted {
  return { lines: [[x, y, x, y]], radius, corners: null };
}

/** Material between two painted areas, mm; negative where they overlap. */
export function gapOf(one: Painted, two: Painted): Closest {
  const closest = leastOf(one.lines, two.lines, closestPoints);
  if (contains(one, two.lines[0]) || contains(two, one.lines[0])) {
    return { ...closest, distanceMm: -closest.distanceMm - one.radius - two.radius };
  }
  const { distanceMm: d, x1, y1, x2, y2 } = closest;
  if (d === 0) return { ...closest, distanceMm: -one.radius - two.radius };
  const ux = (x2 - x1) / d;
  const uy = (y2 - y1) / d;
  return {
    distanceMm: d - one.radius - two.radius,
    x1: x1 + ux * one.radius,
    y1: y1 + uy * one.radius,
    x2: x2 - ux * two.radius,
    y2: y2 - uy * two.radius,
  };
}

const FARTHEST: Closest = { distanceMm: Infinity, x1: NaN, y1: NaN, x2: NaN, y2: NaN };

/** The smallest of all gaps between the members of two lists that are not empty; of equals the first. */
function leastOf<T>(ones: readonly T[], twos: readonly T[], measure: (one: T, two: T) => Closest): Closest {
  let best = FARTHEST;
  for (const one of ones) for (const two of twos) best = nearer(best, measure(one, two));
  return best;
}

function contains({ corners }: Painted, [x, y]: Line): boolean {
  if (corners === null) return false;
  let side = 0;
  for (let k = 0; k < corners.length; k++) {
    const [ax, ay] = corners[k];
    const [bx, by] = corners[(k + 1) % corners.length];
    const cross = (bx - ax) * (y - ay) - (by - ay) * (x - ax);
    if (cross === 0) continue;
    if (side !== 0 && Math.sign(cross) !== side) return false;
    side = Math.sign(cross);
  }
  return true;
}
