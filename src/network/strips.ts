import { grouped, remembered } from '../by-key.ts';
import { piecesNear } from '../geometry/near.ts';
import { pieceAt } from '../geometry/pieces.ts';
import { addStripStretches, coveredUpTo, type Line, lineTo } from '../geometry/strip.ts';
import { type Draft, ROUNDING_MM } from './draft.ts';
import type { KeptStrips } from './kept-strips.ts';

/** Up to so many neighbours a look at each costs less than sorting them. */
const FEW = 32;

/**
 * Answers how far centrelines stay inside strips: as joined and to the exact wall where `kept` is given, else as drawn and to
 * the wall within the slack, which decides whether they stay inside. A strip is a key per centreline: its channel, or the
 * first centreline of strips united by rule 5. A piece that thousands cross sorts its neighbours once and not at each
 * question.
 */
export class Strips {
  private readonly draft: Draft;
  private readonly keyOf: (centreline: number) => number;
  private readonly kept: KeptStrips | null;
  private readonly sorted = new Map<number, Map<number, number[]>>();

  constructor(draft: Draft, keyOf: (centreline: number) => number, kept: KeptStrips | null) {
    this.draft = draft;
    this.keyOf = keyOf;
    this.kept = kept;
  }

  /**
   * How far a centreline, walked from position `from` in the given direction, stays inside a strip without leaving it (mm;
   * 0 when it leaves at once). Looks only at the pieces near each piece as drawn, and at those `grown` towards the walk by
   * what was carried on.
   */
  reach(
    centreline: number,
    from: number,
    direction: 1 | -1,
    key: number,
    grown: readonly number[] = [],
  ): number {
    const { draft } = this;
    const grownHere = grown.filter((piece) => this.isOf(piece, key));
    const length = draft.pieces.centrelineLength[centreline];
    if (from >= 0 && from <= length) return this.reachDrawn(centreline, from, direction, key, grownHere, 0);
    // On a carried-on piece first, since the walk starts there.
    const inward = from < 0 ? 1 : -1;
    if (direction !== inward) return 0;
    const end = from < 0 ? 2 * centreline : 2 * centreline + 1;
    const span = from < 0 ? -from : from - length;
    const near = piecesNearExtension(draft, end).filter((piece) => this.isOf(piece, key));
    const { x, y, tipX, tipY, extension } = draft.ends;
    const offset = extension[end] - span;
    const line = lineTo(tipX[end], tipY[end], x[end], y[end]);
    const inside = this.coverage([...near, ...grownHere], line, offset);
    if (inside < span - ROUNDING_MM) return inside;
    return this.reachDrawn(centreline, from < 0 ? 0 : length, direction, key, grownHere, inside);
  }

  /** The same on the drawn centreline, after what was walked before; piece by piece. */
  private reachDrawn(
    centreline: number,
    from: number,
    direction: 1 | -1,
    key: number,
    grown: readonly number[],
    before: number,
  ): number {
    const { pieces } = this.draft;
    const { x1, y1, x2, y2, start, length } = pieces;
    const forward = direction === 1;
    const first = pieces.firstPiece[centreline];
    const last = pieces.firstPiece[centreline + 1] - 1;
    let walked = before;
    let piece = pieceAt(pieces, centreline, from);
    if (!forward && piece > first && from === start[piece]) piece--;
    let offset = forward ? from - start[piece] : start[piece] + length[piece] - from;
    for (let count = last - first + 2; count > 0; count--) {
      const near = grown.length === 0 ? this.near(piece, key) : [...this.near(piece, key), ...grown];
      const line = forward
        ? lineTo(x1[piece], y1[piece], x2[piece], y2[piece])
        : lineTo(x2[piece], y2[piece], x1[piece], y1[piece]);
      const inside = this.coverage(near, line, offset);
      walked += inside;
      if (inside < length[piece] - offset - ROUNDING_MM) return walked;
      if (piece === (forward ? last : first)) {
        if (pieces.centrelineClosed[centreline] === 0) return walked;
        piece = forward ? first : last;
      } else piece += direction;
      offset = 0;
    }
    return walked;
  }

  /** The pieces of a strip near a piece. */
  private near(piece: number, key: number): readonly number[] {
    const { near, pieces } = this.draft;
    const count = near.firstPair[piece + 1] - near.firstPair[piece];
    if (count <= FEW) return piecesNear(near, piece).filter((other) => this.isOf(other, key));
    const byKey = remembered(this.sorted, piece, () =>
      grouped(piecesNear(near, piece), (other) => this.keyOf(pieces.centreline[other])),
    );
    return byKey.get(key) ?? [];
  }

  private isOf(piece: number, key: number): boolean {
    return this.keyOf(this.draft.pieces.centreline[piece]) === key;
  }

  /** Length from `offset` on along a line that the strip's pieces cover without a gap. */
  private coverage(near: readonly number[], line: Line, offset: number): number {
    const { pieces, slackMm } = this.draft;
    const stretches: number[] = [];
    for (const i of near) {
      if (this.kept !== null) this.kept.addStretches(stretches, i, line);
      else {
        const length = pieces.centrelineLength[pieces.centreline[i]];
        addStripStretches(stretches, pieces, i, line, slackMm, null, 0, length, slackMm);
      }
    }
    return Math.max(0, coveredUpTo(stretches, offset, slackMm) - offset);
  }
}

/** The pieces of an end's plane that come within a distance of what it was carried on by, box by box. */
export function piecesNearExtension(
  { near, ends, pieces, chip }: Draft,
  end: number,
  withinMm = 0,
): number[] {
  const { plane } = chip.channels[pieces.centrelineChannel[end >> 1]];
  return near.index.search(
    Math.min(ends.x[end], ends.tipX[end]) - withinMm,
    Math.min(ends.y[end], ends.tipY[end]) - withinMm,
    Math.max(ends.x[end], ends.tipX[end]) + withinMm,
    Math.max(ends.y[end], ends.tipY[end]) + withinMm,
    (i) => pieces.plane[i] === plane,
  );
}
