import { pieceAt } from '../geometry/pieces.ts';
import { addStripStretches, coveredUpTo } from '../geometry/strip.ts';
import type { Draft } from './draft.ts';
import type { KeptStrips } from './kept-strips.ts';

/**
 * The pieces near a piece, by the strip that they belong to. A strip is a key per centreline: its channel, or the first
 * centreline of strips united by rule 5. A piece that thousands cross sorts its neighbours once and not at each question.
 */
export class StripNeighbours {
  private readonly draft: Draft;
  private readonly keyOf: (centreline: number) => number;
  private readonly sorted = new Map<number, Map<number, number[]>>();

  constructor(draft: Draft, keyOf: (centreline: number) => number) {
    this.draft = draft;
    this.keyOf = keyOf;
  }

  of(piece: number, key: number): readonly number[] {
    const { near } = this.draft;
    const count = near.firstPair[piece + 1] - near.firstPair[piece];
    if (count <= FEW) return piecesNear(this.draft, piece).filter((other) => this.isOf(other, key));
    let byKey = this.sorted.get(piece);
    if (byKey === undefined) {
      byKey = new Map();
      for (const other of piecesNear(this.draft, piece)) {
        const otherKey = this.keyOf(this.draft.pieces.centreline[other]);
        const list = byKey.get(otherKey);
        if (list === undefined) byKey.set(otherKey, [other]);
        else list.push(other);
      }
      this.sorted.set(piece, byKey);
    }
    return byKey.get(key) ?? [];
  }

  isOf(piece: number, key: number): boolean {
    return this.keyOf(this.draft.pieces.centreline[piece]) === key;
  }
}

/** Up to so many neighbours a look at each costs less than sorting them. */
const FEW = 32;

/**
 * How far a centreline, walked from position `from` in the given direction, stays inside a strip without leaving it
 * (mm; 0 when it leaves at once): as joined and to the exact wall where `kept` is given, else as drawn and to the wall within
 * the slack, which decides whether it stayed inside. Walks piece by piece and looks only at the
 * pieces near each as drawn, and at those `grown` towards the walk by what was carried on.
 */
export function reachInStrip(
  draft: Draft,
  centreline: number,
  from: number,
  direction: 1 | -1,
  strip: StripNeighbours,
  key: number,
  kept: KeptStrips | null,
  grown: readonly number[] = [],
): number {
  const { pieces } = draft;
  const grownHere = grown.filter((piece) => strip.isOf(piece, key));
  const length = pieces.centrelineLength[centreline];
  let walked = 0;

  // On a carried-on piece first, if the walk starts there.
  const startEnd = from < 0 ? 2 * centreline : from > length ? 2 * centreline + 1 : -1;
  let position = from;
  if (startEnd >= 0) {
    const inward = startEnd % 2 === 0 ? 1 : -1;
    if (direction !== inward) return 0;
    const span = startEnd % 2 === 0 ? -from : from - length;
    const inside = coverage(
      draft,
      [...piecesNearExtension(draft, startEnd).filter((piece) => strip.isOf(piece, key)), ...grownHere],
      draft.ends.tipX[startEnd],
      draft.ends.tipY[startEnd],
      draft.ends.x[startEnd],
      draft.ends.y[startEnd],
      draft.ends.extension[startEnd] - span,
      kept,
    );
    walked = inside;
    if (inside < span - 1e-9) return inside;
    position = startEnd % 2 === 0 ? 0 : length;
  }

  const first = pieces.firstPiece[centreline];
  const last = pieces.firstPiece[centreline + 1] - 1;
  const closed = pieces.centrelineClosed[centreline] === 1;
  let piece = pieceAt(pieces, centreline, position);
  if (direction === -1 && piece > first && position === pieces.start[piece]) piece--;
  for (let count = last - first + 2; count > 0; count--) {
    const forward = direction === 1;
    const offset = forward
      ? position - pieces.start[piece]
      : pieces.start[piece] + pieces.length[piece] - position;
    const inside = coverage(
      draft,
      grownHere.length === 0 ? strip.of(piece, key) : [...strip.of(piece, key), ...grownHere],
      forward ? pieces.x1[piece] : pieces.x2[piece],
      forward ? pieces.y1[piece] : pieces.y2[piece],
      forward ? pieces.x2[piece] : pieces.x1[piece],
      forward ? pieces.y2[piece] : pieces.y1[piece],
      offset,
      kept,
    );
    walked += inside;
    if (inside < pieces.length[piece] - offset - 1e-9) return walked;
    if (forward ? piece === last : piece === first) {
      if (!closed) return walked;
      piece = forward ? first : last;
    } else piece += direction;
    position = forward ? pieces.start[piece] : pieces.start[piece] + pieces.length[piece];
  }
  return walked;
}

/** Length from `offset` on along a→b that the strip's pieces cover without a gap. */
function coverage(
  draft: Draft,
  near: readonly number[],
  ax: number,
  ay: number,
  bx: number,
  by: number,
  offset: number,
  kept: KeptStrips | null,
): number {
  const stretches: number[] = [];
  for (const piece of near) {
    if (kept !== null) kept.addStretches(stretches, piece, ax, ay, bx, by);
    else {
      const length = draft.pieces.centrelineLength[draft.pieces.centreline[piece]];
      addStripStretches(
        stretches,
        draft.pieces,
        piece,
        ax,
        ay,
        bx,
        by,
        draft.slackMm,
        null,
        0,
        length,
        draft.slackMm,
      );
    }
  }
  return Math.max(0, coveredUpTo(stretches, offset, draft.slackMm) - offset);
}

function piecesNear(draft: Draft, piece: number): number[] {
  const { near } = draft;
  const found = [];
  for (let k = near.firstPair[piece]; k < near.firstPair[piece + 1]; k++) {
    const pair = near.pairOf[k];
    found.push(near.pairA[pair] === piece ? near.pairB[pair] : near.pairA[pair]);
  }
  return found;
}

/** The pieces of an end's plane that come within a distance of what it was carried on by, box by box. */
export function piecesNearExtension(draft: Draft, end: number, withinMm = 0): number[] {
  const { near, ends } = draft;
  return (
    near.index?.search(
      Math.min(ends.x[end], ends.tipX[end]) - withinMm,
      Math.min(ends.y[end], ends.tipY[end]) - withinMm,
      Math.max(ends.x[end], ends.tipX[end]) + withinMm,
      Math.max(ends.y[end], ends.tipY[end]) + withinMm,
      (i) =>
        draft.pieces.plane[i] ===
        draft.chip.channels[draft.pieces.channel[draft.pieces.firstPiece[end >> 1]]].plane,
    ) ?? []
  );
}
