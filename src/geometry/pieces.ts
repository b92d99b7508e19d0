import { type Curve, departure, directionAtEnd, FINE_MM } from './curve.ts';

/**
 * Every centreline of every channel, and every straight piece of them, as columns (mm, y down).
 * Position on a centreline is the length s of its pieces from the first drawn point: within 1e-4 of the curve's length.
 */
export interface Pieces extends Readonly<Omit<PieceColumns, 'curves'>> {
  readonly curves: ReadonlyMap<number, Curve>;
}

type PieceColumns = ReturnType<typeof emptyPieces>;

/** Columns of the right length, to be filled. */
export function emptyPieces(centrelineCount: number, count: number) {
  return {
    centrelineCount,
    /** Channel of each centreline. */
    centrelineChannel: new Int32Array(centrelineCount),
    centrelineClosed: new Uint8Array(centrelineCount),
    /** Drawn length of each centreline. */
    centrelineLength: new Float64Array(centrelineCount),
    /** Unit direction out of the centreline at its start (2c) and its last point (2c + 1): a curve's own, not its chord's. */
    outX: new Float64Array(2 * centrelineCount),
    outY: new Float64Array(2 * centrelineCount),
    /** Pieces of centreline c are firstPiece[c] … firstPiece[c + 1] − 1, in drawn order. Length centrelineCount + 1. */
    firstPiece: new Int32Array(centrelineCount + 1),

    count,
    x1: new Float64Array(count),
    y1: new Float64Array(count),
    x2: new Float64Array(count),
    y2: new Float64Array(count),
    length: new Float64Array(count),
    /** Arc length at the piece's first point. */
    start: new Float64Array(count),
    /** Half the width of the strip. */
    half: new Float64Array(count),
    /** Radius of the curve the piece was cut from, 0 for a straight one. */
    bendRadius: new Float64Array(count),
    /** How far its curve lies from the piece, at most; 0 for a straight one. Above FINE_MM only where nothing is near. */
    bulge: new Float64Array(count),
    /** The curve of each piece whose bulge is above FINE_MM. */
    curves: new Map<number, Curve>(),
    /** The same number for pieces that one chord was cut into (fine-cuts.ts): what lies between them is no drawn vertex. */
    chord: new Int32Array(count),
    centreline: new Int32Array(count),
    channel: new Int32Array(count),
    plane: new Int32Array(count),
  };
}

/** What pieces are made of: a channel's centrelines (mm), how far its strip reaches to either side, and its plane. */
export interface StripSource {
  readonly plane: number;
  readonly stripHalfWidthMm: number;
  readonly centrelines: readonly {
    readonly points: Float64Array;
    readonly closed: boolean;
    readonly bendRadius: Float64Array;
    readonly curves: readonly (Curve | null)[] | null;
  }[];
}

/** Lays all centrelines out in columns. Cost: linear in the number of points. */
export function toPieces(channels: readonly StripSource[]): Pieces {
  let centrelineCount = 0;
  let count = 0;
  for (const channel of channels) {
    for (const line of channel.centrelines) {
      centrelineCount++;
      count += line.bendRadius.length;
    }
  }
  const pieces = emptyPieces(centrelineCount, count);
  let c = 0;
  let i = 0;
  channels.forEach((channel, channelIndex) => {
    for (const line of channel.centrelines) {
      const { points } = line;
      let start = 0;
      pieces.firstPiece[c] = i;
      for (let k = 0; k < line.bendRadius.length; k++, i++) {
        setPlace(pieces, i, points[2 * k], points[2 * k + 1], points[2 * k + 2], points[2 * k + 3], start);
        start += pieces.length[i];
        pieces.half[i] = channel.stripHalfWidthMm;
        pieces.bendRadius[i] = line.bendRadius[k];
        pieces.chord[i] = i;
        pieces.centreline[i] = c;
        pieces.channel[i] = channelIndex;
        pieces.plane[i] = channel.plane;
        const curve = line.curves?.[k] ?? null;
        if (curve === null) continue;
        pieces.bulge[i] = departure(curve);
        if (pieces.bulge[i] > FINE_MM) pieces.curves.set(i, curve);
      }
      pieces.centrelineChannel[c] = channelIndex;
      pieces.centrelineClosed[c] = line.closed ? 1 : 0;
      pieces.centrelineLength[c] = start;
      if (i > pieces.firstPiece[c]) setOut(pieces, c, i - 1, line.curves);
      c++;
    }
  });
  pieces.firstPiece[c] = i;
  return pieces;
}

/** Where piece i runs, and that it begins at position `start` of its centreline. */
export function setPlace(
  pieces: PieceColumns,
  i: number,
  x1: number,
  y1: number,
  x2: number,
  y2: number,
  start: number,
): void {
  pieces.x1[i] = x1;
  pieces.y1[i] = y1;
  pieces.x2[i] = x2;
  pieces.y2[i] = y2;
  pieces.length[i] = Math.hypot(x2 - x1, y2 - y1);
  pieces.start[i] = start;
}

function setOut(
  pieces: PieceColumns,
  c: number,
  last: number,
  curves: readonly (Curve | null)[] | null,
): void {
  const first = pieces.firstPiece[c];
  const startCurve = curves?.[0] ?? null;
  const endCurve = curves?.[last - first] ?? null;
  const into = startCurve && directionAtEnd(startCurve, 'start');
  const out = endCurve && directionAtEnd(endCurve, 'end');
  pieces.outX[2 * c] =
    into !== null ? -into[0] : (pieces.x1[first] - pieces.x2[first]) / pieces.length[first];
  pieces.outY[2 * c] =
    into !== null ? -into[1] : (pieces.y1[first] - pieces.y2[first]) / pieces.length[first];
  pieces.outX[2 * c + 1] = out !== null ? out[0] : (pieces.x2[last] - pieces.x1[last]) / pieces.length[last];
  pieces.outY[2 * c + 1] = out !== null ? out[1] : (pieces.y2[last] - pieces.y1[last]) / pieces.length[last];
}

/** The piece of a centreline that holds position s (clamped to the ends). Binary search. */
export function pieceAt(pieces: Pieces, centreline: number, s: number): number {
  let low = pieces.firstPiece[centreline];
  let high = pieces.firstPiece[centreline + 1] - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (pieces.start[middle] <= s) low = middle;
    else high = middle - 1;
  }
  return low;
}

/** The piece at an end: end 2c is the start of centreline c, 2c + 1 its last point. */
export function endPiece(pieces: Pieces, end: number): number {
  const c = end >> 1;
  return (end & 1) === 0 ? pieces.firstPiece[c] : pieces.firstPiece[c + 1] - 1;
}

/** True when the piece's first (second) point is an inner vertex of its centreline, not one of its ends. */
export function startsAtVertex(pieces: Pieces, piece: number): boolean {
  const c = pieces.centreline[piece];
  return pieces.centrelineClosed[c] === 1 || piece > pieces.firstPiece[c];
}

export function endsAtVertex(pieces: Pieces, piece: number): boolean {
  const c = pieces.centreline[piece];
  return pieces.centrelineClosed[c] === 1 || piece < pieces.firstPiece[c + 1] - 1;
}

/** The piece before (−1) or after (1) on the centreline, round a closed one; −1 at an end. */
export function neighbourPiece(pieces: Pieces, piece: number, step: 1 | -1): number {
  const c = pieces.centreline[piece];
  const first = pieces.firstPiece[c];
  const count = pieces.firstPiece[c + 1] - first;
  if (pieces.centrelineClosed[c] === 1) {
    return count > 1 ? first + ((piece - first + step + count) % count) : -1;
  }
  return piece + step < first || piece + step >= first + count ? -1 : piece + step;
}

/** Unit vector along a piece. */
export function directionOf({ x1, y1, x2, y2, length }: Pieces, i: number): readonly [number, number] {
  return [(x2[i] - x1[i]) / length[i], (y2[i] - y1[i]) / length[i]];
}

/** Whether two pieces next to each other are cut from one curve, or from two that are tangent. */
export function goesOnSmoothly(pieces: Pieces, one: number, two: number): boolean {
  if (pieces.bendRadius[one] === 0 || pieces.bendRadius[two] === 0) return false;
  const ux = pieces.x2[one] - pieces.x1[one];
  const uy = pieces.y2[one] - pieces.y1[one];
  const vx = pieces.x2[two] - pieces.x1[two];
  const vy = pieces.y2[two] - pieces.y1[two];
  const product = pieces.length[one] * pieces.length[two];
  // Two chords of one curve turn by half of what each bends.
  const bends = pieces.length[one] / pieces.bendRadius[one] + pieces.length[two] / pieces.bendRadius[two];
  return ux * vx + uy * vy > 0 && Math.abs(ux * vy - uy * vx) <= bends * product;
}
