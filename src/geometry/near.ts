import Flatbush from 'flatbush';
import { InputError } from '../errors.ts';
import type { Pieces } from './pieces.ts';
import { segmentDistance } from './segment.ts';

export const MAX_SEGMENTS = 2_000_000;
export const MAX_NEAR_PAIRS = 20_000_000;

/** Stretches of one centreline that come nearer than this are looked at as possible meetings however close along it. */
const TOUCH_MM = 0.001;

/** What is asked of an index of boxes. Flatbush answers; its own type stays inside, since published types name no package. */
export interface BoxIndex {
  /** Round all boxes. */
  readonly minX: number;
  readonly minY: number;
  readonly maxX: number;
  readonly maxY: number;
  /** Numbers of the boxes that touch a rectangle, of those that `keep` lets through. */
  search(minX: number, minY: number, maxX: number, maxY: number, keep?: (index: number) => boolean): number[];
  /** Numbers of the boxes nearest to a point, the nearest first, of those that `keep` lets through. */
  neighbors(
    x: number,
    y: number,
    maxResults?: number,
    maxDistance?: number,
    keep?: (index: number) => boolean,
  ): number[];
}

/** The one spatial index over all pieces, and the one list of pairs of pieces that come near each other. */
export interface Nearness {
  readonly pieces: Pieces;
  /** Boxes of the painted pieces (strip, cap and bulge), in piece order. Null when there is no piece. */
  readonly index: BoxIndex | null;
  /** Pairs are listed when their strips come nearer than this. */
  readonly withinMm: number;
  readonly pairCount: number;
  /** pairA[k] < pairB[k]; same plane; not consecutive on one centreline. */
  readonly pairA: Int32Array;
  readonly pairB: Int32Array;
  /** Distance between the two pieces' centrelines; a pair's strips are nearer than withinMm (and what their curves bulge). */
  readonly pairDistance: Float64Array;
  /** Pairs of piece i are pairOf[firstPair[i]] … pairOf[firstPair[i + 1] − 1]. */
  readonly firstPair: Int32Array;
  readonly pairOf: Int32Array;
}

/**
 * Finds all pairs of pieces of one plane whose strips come nearer than withinMm.
 *
 * Cost: n log n for the index and one query per piece. Errors: InputError naming the limit when the drawing has more than
 * MAX_SEGMENTS pieces or MAX_NEAR_PAIRS pairs.
 */
export function findNearPairs(
  pieces: Pieces,
  withinMm: number,
  capFactor: (piece: number) => number,
  where: string,
): Nearness {
  const n = pieces.count;
  if (n > MAX_SEGMENTS) {
    throw new InputError(
      where,
      `the drawing has ${n} straight segments; the limit is ${MAX_SEGMENTS} (segment limit): draw fewer or coarser curves, or split the layout`,
    );
  }
  if (n === 0) return emptyNearness(pieces, withinMm);
  const minX = new Float64Array(n);
  const minY = new Float64Array(n);
  const maxX = new Float64Array(n);
  const maxY = new Float64Array(n);
  const index = new Flatbush(n);
  for (let i = 0; i < n; i++) {
    const margin = pieces.half[i] * capFactor(i) + pieces.bulge[i];
    minX[i] = Math.min(pieces.x1[i], pieces.x2[i]) - margin;
    minY[i] = Math.min(pieces.y1[i], pieces.y2[i]) - margin;
    maxX[i] = Math.max(pieces.x1[i], pieces.x2[i]) + margin;
    maxY[i] = Math.max(pieces.y1[i], pieces.y2[i]) + margin;
    index.add(minX[i], minY[i], maxX[i], maxY[i]);
  }
  index.finish();

  let pairA = new Int32Array(Math.max(64, 2 * n));
  let pairB = new Int32Array(pairA.length);
  let pairDistance = new Float64Array(pairA.length);
  let pairCount = 0;
  for (let i = 0; i < n; i++) {
    const near = index.search(minX[i] - withinMm, minY[i] - withinMm, maxX[i] + withinMm, maxY[i] + withinMm);
    for (const j of near) {
      if (j <= i || pieces.plane[j] !== pieces.plane[i] || areConsecutive(pieces, i, j)) continue;
      const distance = segmentDistance(
        pieces.x1[i],
        pieces.y1[i],
        pieces.x2[i],
        pieces.y2[i],
        pieces.x1[j],
        pieces.y1[j],
        pieces.x2[j],
        pieces.y2[j],
      );
      const strips = pieces.half[i] * capFactor(i) + pieces.half[j] * capFactor(j);
      if (distance > strips + withinMm + pieces.bulge[i] + pieces.bulge[j]) continue;
      if (isOwnBend(pieces, i, j, distance)) continue;
      if (pairCount === pairA.length) {
        if (pairCount >= MAX_NEAR_PAIRS) {
          throw new InputError(
            where,
            `more than ${MAX_NEAR_PAIRS} pairs of segments lie close together (near-pair limit): the drawing repeats or piles up its strokes; remove the copies`,
          );
        }
        const size = Math.min(MAX_NEAR_PAIRS, 2 * pairCount);
        pairA = grown(pairA, new Int32Array(size));
        pairB = grown(pairB, new Int32Array(size));
        pairDistance = grown(pairDistance, new Float64Array(size));
      }
      pairA[pairCount] = i;
      pairB[pairCount] = j;
      pairDistance[pairCount] = distance;
      pairCount++;
    }
  }
  pairA = pairA.subarray(0, pairCount);
  pairB = pairB.subarray(0, pairCount);
  return {
    pieces,
    index,
    withinMm,
    pairCount,
    pairA,
    pairB,
    pairDistance: pairDistance.subarray(0, pairCount),
    ...pairsByPiece(n, pairA, pairB),
  };
}

/** The pieces that come near a piece, in the order of their pairs. */
export function piecesNear({ pairA, pairB, firstPair, pairOf }: Nearness, piece: number): number[] {
  const found: number[] = [];
  for (let k = firstPair[piece]; k < firstPair[piece + 1]; k++) {
    const pair = pairOf[k];
    found.push(pairA[pair] === piece ? pairB[pair] : pairA[pair]);
  }
  return found;
}

function areConsecutive(pieces: Pieces, i: number, j: number): boolean {
  const c = pieces.centreline[i];
  if (c !== pieces.centreline[j]) return false;
  if (j - i === 1) return true;
  return pieces.centrelineClosed[c] === 1 && i === pieces.firstPiece[c] && j === pieces.firstPiece[c + 1] - 1;
}

/** Two pieces that lie, ends and all, within two widths of one centreline are one duct turning, unless they touch. */
function isOwnBend(pieces: Pieces, i: number, j: number, distance: number): boolean {
  const c = pieces.centreline[i];
  if (c !== pieces.centreline[j] || distance <= TOUCH_MM) return false;
  const span = pieces.start[j] + pieces.length[j] - pieces.start[i];
  const twoWidths = 4 * pieces.half[i];
  if (span <= twoWidths) return true;
  if (pieces.centrelineClosed[c] === 0) return false;
  const between = pieces.start[j] - pieces.start[i] - pieces.length[i];
  return pieces.centrelineLength[c] - between <= twoWidths;
}

function pairsByPiece(n: number, pairA: Int32Array, pairB: Int32Array) {
  const firstPair = new Int32Array(n + 1);
  for (let k = 0; k < pairA.length; k++) {
    firstPair[pairA[k] + 1]++;
    firstPair[pairB[k] + 1]++;
  }
  for (let i = 0; i < n; i++) firstPair[i + 1] += firstPair[i];
  const fill = firstPair.slice(0, n);
  const pairOf = new Int32Array(2 * pairA.length);
  for (let k = 0; k < pairA.length; k++) {
    pairOf[fill[pairA[k]]++] = k;
    pairOf[fill[pairB[k]]++] = k;
  }
  return { firstPair, pairOf };
}

function grown<T extends Int32Array | Float64Array>(from: T, to: T): T {
  to.set(from);
  return to;
}

function emptyNearness(pieces: Pieces, withinMm: number): Nearness {
  const none = new Int32Array(0);
  return {
    pieces,
    index: null,
    withinMm,
    pairCount: 0,
    pairA: none,
    pairB: none,
    pairDistance: new Float64Array(0),
    firstPair: new Int32Array(1),
    pairOf: none,
  };
}
