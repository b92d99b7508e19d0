import { InputError } from '../errors.ts';
import { sidesByNode } from '../groups.ts';
import { type BoxIndex, indexBoxes } from './box-index.ts';
import { distanceBetween } from './on-piece.ts';
import type { Pieces } from './pieces.ts';

export const MAX_SEGMENTS = 2_000_000;
export const MAX_NEAR_PAIRS = 20_000_000;

/** Stretches of one centreline that come nearer than this are looked at as possible meetings however close along it. */
const TOUCH_MM = 0.001;

/** The one spatial index over all pieces, and the one list of pairs of pieces that come near each other. */
export interface Nearness {
  readonly pieces: Pieces;
  /** Boxes of the painted pieces (strip, cap and bulge), in piece order. */
  readonly index: BoxIndex;
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
  const box = pieceBoxes(pieces, (i) => pieces.half[i] * capFactor(i) + pieces.bulge[i]);
  const index = indexBoxes(box);

  // twenty million pairs fit into columns that grow, and hardly into lists
  let pairA = new Int32Array(Math.max(64, 2 * n));
  let pairB = new Int32Array(pairA.length);
  let pairDistance = new Float64Array(pairA.length);
  let pairCount = 0;
  for (let i = 0; i < n; i++) {
    const b = 4 * i;
    const near = index.search(
      box[b] - withinMm,
      box[b + 1] - withinMm,
      box[b + 2] + withinMm,
      box[b + 3] + withinMm,
    );
    for (const j of near) {
      if (j <= i || pieces.plane[j] !== pieces.plane[i] || areConsecutive(pieces, i, j)) continue;
      const distance = distanceBetween(pieces, i, j);
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
  const columns = { pairA: pairA.subarray(0, pairCount), pairB: pairB.subarray(0, pairCount) };
  const { first: firstPair, item: side } = sidesByNode(n, columns.pairA, columns.pairB);
  return {
    pieces,
    index,
    withinMm,
    pairCount,
    ...columns,
    pairDistance: pairDistance.subarray(0, pairCount),
    firstPair,
    pairOf: side.map((s) => s >> 1),
  };
}

/** Boxes of pieces, minX minY maxX maxY of each, wider by a margin on every side. */
export function pieceBoxes(
  { count, x1, y1, x2, y2 }: Pieces,
  marginOf: (piece: number) => number,
): Float64Array {
  const box = new Float64Array(4 * count);
  for (let i = 0, b = 0; i < count; i++) {
    const margin = marginOf(i);
    box[b++] = Math.min(x1[i], x2[i]) - margin;
    box[b++] = Math.min(y1[i], y2[i]) - margin;
    box[b++] = Math.max(x1[i], x2[i]) + margin;
    box[b++] = Math.max(y1[i], y2[i]) + margin;
  }
  return box;
}

/** The pieces that come near a piece, in the order of their pairs; no more than `most`. */
export function piecesNear(
  { pairA, pairB, firstPair, pairOf }: Nearness,
  piece: number,
  most = Infinity,
): number[] {
  const found: number[] = [];
  const end = Math.min(firstPair[piece + 1], firstPair[piece] + most);
  for (let k = firstPair[piece]; k < end; k++) {
    const pair = pairOf[k];
    found.push(pairA[pair] === piece ? pairB[pair] : pairA[pair]);
  }
  return found;
}

function grown<Column extends Int32Array | Float64Array>(column: Column, into: Column): Column {
  into.set(column);
  return into;
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
