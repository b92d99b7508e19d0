import { remembered } from '../by-key.ts';
import type { Port } from '../chip/types.ts';
import type { Nearness } from '../geometry/near.ts';
import { distanceToPiece, nearestShare } from '../geometry/on-piece.ts';
import { neighbourPiece, type Pieces, pieceAt } from '../geometry/pieces.ts';
import { bundleAt, findBundles } from './bundles.ts';
import { type Point, toEnds } from './draft.ts';

/** A place where channels of two layers cross in one plane and both go on beyond the other's strip. */
export interface LayerCrossing {
  /** Layers, as layerOf numbers them; a < b. */
  readonly a: number;
  readonly b: number;
  /** Centrelines of a and b. */
  readonly centrelineA: number;
  readonly centrelineB: number;
  readonly xMm: number;
  readonly yMm: number;
}

/** Strokes that run along each other within this angle do not cross there. */
const LEAST_SINE = 1e-3;

/**
 * True crossings between layers: where a channel ends at another, however near its end, they are meant to meet. A stroke
 * that goes on in another of its layer, end to end, does not end there. What lies in a well is the port's.
 *
 * Cost: linear in the near pairs, and a short walk for each that crosses.
 */
export function layerCrossings(
  near: Nearness,
  ports: readonly Port[],
  slackMm: number,
  layerOf: (channel: number) => number,
): LayerCrossing[] {
  const { pieces, pairA, pairB, pairCount, pairDistance } = near;
  const crossings: LayerCrossing[] = [];
  const seen = new Map<string, number[]>();
  let goesOn: ReturnType<typeof walker> | null = null;
  for (let k = 0; k < pairCount; k++) {
    if (pairDistance[k] > slackMm) continue;
    const [i, j] = inOrder(pieces, pairA[k], pairB[k], layerOf);
    const a = layerOf(pieces.channel[i]);
    const b = layerOf(pieces.channel[j]);
    if (a === b) continue;
    const place = crossingOf(pieces, i, j, slackMm);
    if (place === null || ports.some((port) => isInWell(port, place))) continue;
    const [c, d] = [pieces.centreline[i], pieces.centreline[j]];
    if (isKnown(seen, `${c} ${d}`, place.s, slackMm)) continue;
    goesOn ??= walker(near, slackMm, layerOf);
    if (!goesOn(c, place.s, j) || !goesOn(d, place.t, i)) continue;
    crossings.push({ a, b, centrelineA: c, centrelineB: d, xMm: place.x, yMm: place.y });
  }
  return crossings;
}

function inOrder(pieces: Pieces, i: number, j: number, layerOf: (channel: number) => number) {
  return layerOf(pieces.channel[i]) <= layerOf(pieces.channel[j]) ? [i, j] : [j, i];
}

interface Place extends Point {
  /** Positions on the two centrelines, mm. */
  readonly s: number;
  readonly t: number;
}

/** Where two pieces cross, or come within the slack of each other; null where they run along each other. */
function crossingOf(pieces: Pieces, i: number, j: number, slackMm: number): Place | null {
  const { x1, y1, x2, y2, length, start } = pieces;
  const ux = (x2[i] - x1[i]) / length[i];
  const uy = (y2[i] - y1[i]) / length[i];
  const vx = (x2[j] - x1[j]) / length[j];
  const vy = (y2[j] - y1[j]) / length[j];
  const cross = ux * vy - uy * vx;
  if (Math.abs(cross) < LEAST_SINE) return null;
  const wx = x1[j] - x1[i];
  const wy = y1[j] - y1[i];
  const along = Math.min(length[i], Math.max(0, (wx * vy - wy * vx) / cross));
  const x = x1[i] + along * ux;
  const y = y1[i] + along * uy;
  if (distanceToPiece(pieces, j, x, y) > slackMm) return null;
  return { x, y, s: start[i] + along, t: start[j] + nearestShare(pieces, j, x, y) * length[j] };
}

function isInWell({ xMm, yMm, radiusMm }: Port, { x, y }: Point): boolean {
  return Math.hypot(x - xMm, y - yMm) <= radiusMm;
}

/** A crossing at a vertex is found on both pieces that meet there. */
function isKnown(seen: Map<string, number[]>, key: string, s: number, slackMm: number): boolean {
  const known = remembered(seen, key, () => []);
  if (known.some((other) => Math.abs(other - s) <= slackMm)) return true;
  known.push(s);
  return false;
}

/** More strokes than this within the width of one strip are no drawing; bounds the time. */
const MOST_SEAMS = 64;

/** Answers whether a centreline leaves the strip of a piece on both sides of a place. */
function walker(near: Nearness, slackMm: number, layerOf: (channel: number) => number) {
  const { pieces } = near;
  const bundles = findBundles(near, toEnds(pieces), slackMm);

  return (c: number, s: number, across: number): boolean =>
    !endsAt(c, s) && leaves(c, s, 1, across, new Set()) && leaves(c, s, -1, across, new Set());

  function endsAt(c: number, s: number): boolean {
    const length = pieces.centrelineLength[c];
    return pieces.centrelineClosed[c] === 0 && (s <= slackMm || s >= length - slackMm);
  }

  /** Whether the way on from a place comes out of the strip, over seams with other strokes of the layer. */
  function leaves(c: number, s: number, direction: 1 | -1, across: number, passed: Set<number>): boolean {
    let i = pieceAt(pieces, c, s);
    for (let count = pieces.firstPiece[c + 1] - pieces.firstPiece[c]; count > 0 && i >= 0; count--) {
      const x = direction === 1 ? pieces.x2[i] : pieces.x1[i];
      const y = direction === 1 ? pieces.y2[i] : pieces.y1[i];
      if (distanceToPiece(pieces, across, x, y) > pieces.half[across] + slackMm) return true;
      i = neighbourPiece(pieces, i, direction);
    }
    if (pieces.centrelineClosed[c] === 1) return false;
    const end = direction === 1 ? 2 * c + 1 : 2 * c;
    return seamsAt(end).some((other) => {
      if (passed.has(other)) return false;
      if (passed.size >= MOST_SEAMS) return true;
      passed.add(other);
      const atStart = (other & 1) === 0;
      const next = other >> 1;
      return leaves(next, atStart ? 0 : pieces.centrelineLength[next], atStart ? 1 : -1, across, passed);
    });
  }

  /** Ends of other strokes of the layer at the place of an end. */
  function seamsAt(end: number): Int32Array {
    const layer = layerOf(pieces.centrelineChannel[end >> 1]);
    return bundleAt(bundles, end).filter(
      (other) => other !== end && layerOf(pieces.centrelineChannel[other >> 1]) === layer,
    );
  }
}
