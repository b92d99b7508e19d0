import { neighbourPiece, type Pieces } from './pieces.ts';

/**
 * What makes a strip round at an inner vertex: all within half a width of it that neither the piece before nor the piece
 * after holds. Nearly always that is the same as the whole disc, whose rest lies in the two pieces and what goes on from
 * them. Less than half a width before a square end it is not: there the disc reaches beyond the end, and only the sector
 * on the outside of the turn, between the ends of the two pieces, is etched. In a straight run that is nothing.
 */
export type Rounding = typeof ROUND | Sector;

export const ROUND = 'round';

/** The part of the half disc beyond a piece that is not yet beside the next one, which leaves in direction (onX, onY). */
export interface Sector {
  readonly onX: number;
  readonly onY: number;
  /** How far along the next one it reaches, mm: what two places that are one may be apart. */
  readonly mostMm: number;
}

/** The round at the first (step −1) or last point of a piece, an inner vertex of a centreline that is kept between two positions. */
export function roundingAtVertex(
  pieces: Pieces,
  piece: number,
  step: 1 | -1,
  keptFrom: number,
  keptTo: number,
): Rounding {
  const c = pieces.centreline[piece];
  if (pieces.centrelineClosed[c] === 1) return ROUND;
  const half = pieces.half[piece];
  const s = pieces.start[piece] + (step === 1 ? pieces.length[piece] : 0);
  if (s - keptFrom >= half && keptTo - s >= half) return ROUND;
  const next = neighbourPiece(pieces, piece, step);
  return sectorTo(
    (step * (pieces.x2[next] - pieces.x1[next])) / pieces.length[next],
    (step * (pieces.y2[next] - pieces.y1[next])) / pieces.length[next],
  );
}

/** The sector before a piece that goes on from the very same place in a (unit) direction. */
export function sectorTo(onX: number, onY: number): Sector {
  return { onX, onY, mostMm: ROUNDING_MM };
}

/** Far below any drawn length, far above rounding. */
const ROUNDING_MM = 1e-9;

/** The outside of the turn from direction (ux, uy) into a sector's: how far it turns (rad, 0 … π) and on which side the sector lies, 1 where across = uy·x − ux·y is negative. */
export function turnOf(
  ux: number,
  uy: number,
  { onX, onY }: Sector,
): { readonly angle: number; readonly side: 1 | -1 } {
  const turn = Math.atan2(ux * onY - uy * onX, ux * onX + uy * onY);
  return { angle: Math.abs(turn), side: turn > 0 ? -1 : 1 };
}
