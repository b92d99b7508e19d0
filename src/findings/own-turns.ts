import type { Pieces } from '../geometry/pieces.ts';
import { segmentDistance } from '../geometry/segment.ts';

/**
 * Calls `look` for pairs of pieces of one centreline that are fewer than two widths apart along it, and whose strips come
 * nearer than withinMm. The network's list of near pairs leaves them out as one duct turning; but two long legs of a
 * hairpin belong to them, and these face each other far from the turn.
 *
 * Only pairs whose far ends are more than four widths apart along the centreline are measured, so the short pieces of a
 * curve cost a subtraction each.
 */
export function forOwnTurns(
  pieces: Pieces,
  withinMm: number,
  look: (i: number, j: number, distanceMm: number) => void,
): void {
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const first = pieces.firstPiece[c];
    const count = pieces.firstPiece[c + 1] - first;
    const closed = pieces.centrelineClosed[c] === 1;
    const twoWidths = 4 * pieces.half[first];
    for (let i = first; i < first + count; i++) {
      let between = 0;
      for (let k = 1; k < count - 1; k++) {
        if (!closed && i + k + 1 >= first + count) break;
        between += pieces.length[first + ((i - first + k) % count)];
        if (between >= twoWidths) break;
        const j = first + ((i - first + k + 1) % count);
        // On a closed centreline the pair is met from both sides; its last and first pieces are neighbours.
        if (closed && count - (k + 1) <= 1) break;
        if (pieces.length[i] + between + pieces.length[j] <= 2 * twoWidths) continue;
        const distanceMm = segmentDistance(
          pieces.x1[i],
          pieces.y1[i],
          pieces.x2[i],
          pieces.y2[i],
          pieces.x1[j],
          pieces.y1[j],
          pieces.x2[j],
          pieces.y2[j],
        );
        if (distanceMm > 2 * pieces.half[i] + withinMm) continue;
        look(Math.min(i, j), Math.max(i, j), distanceMm);
      }
    }
  }
}
