import type { Channel } from '../chip/types.ts';

/**
 * Every centreline of every channel, and every straight piece of them, as columns (mm, y down).
 * Position on a centreline is its arc length s from the first drawn point.
 */
export interface Pieces {
  readonly centrelineCount: number;
  /** Channel of each centreline. */
  readonly centrelineChannel: Int32Array;
  readonly centrelineClosed: Uint8Array;
  /** Drawn length of each centreline. */
  readonly centrelineLength: Float64Array;
  /** Pieces of centreline c are firstPiece[c] … firstPiece[c + 1] − 1, in drawn order. Length centrelineCount + 1. */
  readonly firstPiece: Int32Array;

  readonly count: number;
  readonly x1: Float64Array;
  readonly y1: Float64Array;
  readonly x2: Float64Array;
  readonly y2: Float64Array;
  readonly length: Float64Array;
  /** Arc length at the piece's first point. */
  readonly start: Float64Array;
  /** Half the width of the strip. */
  readonly half: Float64Array;
  /** Radius of the curve the piece was cut from, 0 for a straight one. */
  readonly bendRadius: Float64Array;
  readonly centreline: Int32Array;
  readonly channel: Int32Array;
  readonly plane: Int32Array;
}

/** Lays all centrelines out in columns. Cost: linear in the number of points. */
export function toPieces(channels: readonly Channel[]): Pieces {
  let centrelineCount = 0;
  let count = 0;
  for (const channel of channels) {
    for (const line of channel.centrelines) {
      centrelineCount++;
      count += line.bendRadius.length;
    }
  }
  const pieces = {
    centrelineCount,
    centrelineChannel: new Int32Array(centrelineCount),
    centrelineClosed: new Uint8Array(centrelineCount),
    centrelineLength: new Float64Array(centrelineCount),
    firstPiece: new Int32Array(centrelineCount + 1),
    count,
    x1: new Float64Array(count),
    y1: new Float64Array(count),
    x2: new Float64Array(count),
    y2: new Float64Array(count),
    length: new Float64Array(count),
    start: new Float64Array(count),
    half: new Float64Array(count),
    bendRadius: new Float64Array(count),
    centreline: new Int32Array(count),
    channel: new Int32Array(count),
    plane: new Int32Array(count),
  };
  let c = 0;
  let i = 0;
  channels.forEach((channel, channelIndex) => {
    for (const line of channel.centrelines) {
      const { points } = line;
      let start = 0;
      pieces.firstPiece[c] = i;
      for (let k = 0; k < line.bendRadius.length; k++, i++) {
        const dx = points[2 * k + 2] - points[2 * k];
        const dy = points[2 * k + 3] - points[2 * k + 1];
        pieces.x1[i] = points[2 * k];
        pieces.y1[i] = points[2 * k + 1];
        pieces.x2[i] = points[2 * k + 2];
        pieces.y2[i] = points[2 * k + 3];
        pieces.length[i] = Math.hypot(dx, dy);
        pieces.start[i] = start;
        start += pieces.length[i];
        pieces.half[i] = channel.stripHalfWidthMm;
        pieces.bendRadius[i] = line.bendRadius[k];
        pieces.centreline[i] = c;
        pieces.channel[i] = channelIndex;
        pieces.plane[i] = channel.plane;
      }
      pieces.centrelineChannel[c] = channelIndex;
      pieces.centrelineClosed[c] = line.closed ? 1 : 0;
      pieces.centrelineLength[c] = start;
      c++;
    }
  });
  pieces.firstPiece[c] = i;
  return pieces;
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

/** True when the piece's first (second) point is an inner vertex of its centreline, not one of its ends. */
export function startsAtVertex(pieces: Pieces, piece: number): boolean {
  const c = pieces.centreline[piece];
  return pieces.centrelineClosed[c] === 1 || piece > pieces.firstPiece[c];
}

export function endsAtVertex(pieces: Pieces, piece: number): boolean {
  const c = pieces.centreline[piece];
  return pieces.centrelineClosed[c] === 1 || piece < pieces.firstPiece[c + 1] - 1;
}
