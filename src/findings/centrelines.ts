import type { Channel } from '../chip/types.ts';
import type { Network } from '../network/types.ts';
import type { Line, Place } from './closest.ts';

interface DirectedPlace extends Place {
  /** Unit vector along the drawn direction. */
  readonly ux: number;
  readonly uy: number;
}

/** The channel that a centreline belongs to. */
export function channelOf({ chip, trace }: Network, centreline: number): Channel {
  return chip.channels[trace.near.pieces.centrelineChannel[centreline]];
}

/** Middle of a channel's first centreline, by length; null when the channel has no length. */
export function middleOfChannel({ centrelines }: Channel): DirectedPlace | null {
  if (centrelines.length === 0) return null;
  const { points } = centrelines[0];
  let total = 0;
  for (let k = 0; k + 3 < points.length; k += 2) total += pieceLength(points, k);
  let left = total / 2;
  for (let k = 0; k + 3 < points.length; k += 2) {
    const length = pieceLength(points, k);
    if (left <= length) {
      const ux = (points[k + 2] - points[k]) / length;
      const uy = (points[k + 3] - points[k + 1]) / length;
      return { xMm: points[k] + left * ux, yMm: points[k + 1] + left * uy, ux, uy };
    }
    left -= length;
  }
  return null;
}

/** A line across the channel at a place, from wall to wall. */
export function acrossMark({ xMm, yMm, ux, uy }: DirectedPlace, widthMm: number): Line {
  const half = widthMm / 2;
  return [xMm + uy * half, yMm - ux * half, xMm - uy * half, yMm + ux * half];
}

function pieceLength(points: Float64Array, k: number): number {
  return Math.hypot(points[k + 2] - points[k], points[k + 3] - points[k + 1]);
}
