import { pieceAt } from '../geometry/pieces.ts';
import { type Rounding, sectorTo } from '../geometry/rounding.ts';
import {
  addShapeStretches,
  addStripStretches,
  type PieceShape,
  roundingAt,
  roundingAtSeam,
  STRAIGHT,
  type StripEnds,
} from '../geometry/strip.ts';
import { type Draft, isCarriedStraightOn, pointAt } from './draft.ts';
import type { Kept } from './kept.ts';

/**
 * The strips of the centrelines as they were joined: carried on in their own direction (rule 3) or cut back (rule 4), and
 * ended square there; one carried on aside, to the nearest point, is etched as drawn. So a wide or deep branch takes the
 * same piece of the channel that it meets, to whichever side of that channel's centreline it was drawn.
 */
export class KeptStrips {
  private readonly draft: Draft;
  private readonly kept: Kept;
  private readonly ends: StripEnds;

  constructor(draft: Draft, kept: Kept, ends: StripEnds) {
    this.draft = draft;
    this.kept = kept;
    this.ends = ends;
  }

  /** Adds the stretches of a→b that lie in the strip of one piece. */
  addStretches(into: number[], piece: number, ax: number, ay: number, bx: number, by: number): void {
    const { pieces, slackMm } = this.draft;
    const c = pieces.centreline[piece];
    const from = this.kept.from[c];
    const to = this.kept.to[c];
    const start = pieces.start[piece];
    const end = start + pieces.length[piece];
    const isFirst = piece === pieces.firstPiece[c];
    const isLast = piece === pieces.firstPiece[c + 1] - 1;
    const growsAtStart = isFirst && from < 0 && isCarriedStraightOn(this.draft, 2 * c);
    const growsAtEnd = isLast && to > end && isCarriedStraightOn(this.draft, 2 * c + 1);
    const startMoves = from > start || growsAtStart;
    const endMoves = to < end || growsAtEnd;
    if (pieces.centrelineClosed[c] === 1 || !(startMoves || endMoves)) {
      addStripStretches(into, pieces, piece, ax, ay, bx, by, slackMm, this.ends, from, to);
      return;
    }
    if (to <= start || from >= end) return;
    if (pieces.bulge[piece] > 0 && (growsAtStart || growsAtEnd)) {
      this.addBesideCurve(into, piece, growsAtStart, growsAtEnd, ax, ay, bx, by);
      return;
    }
    const low = startMoves ? from : start;
    const high = endMoves ? to : end;
    this.addShape(into, c, low, high, ax, ay, bx, by, {
      atStart: startMoves
        ? roundingAtSeam(pieces, 2 * c, this.ends, slackMm)
        : roundingAt(pieces, piece, -1, this.ends, slackMm, from, to),
      atEnd: endMoves
        ? roundingAtSeam(pieces, 2 * c + 1, this.ends, slackMm)
        : roundingAt(pieces, piece, 1, this.ends, slackMm, from, to),
    });
  }

  /** A curve carried on straight turns a little where it is: its piece and what was carried on are two straight pieces. */
  private addBesideCurve(
    into: number[],
    piece: number,
    growsAtStart: boolean,
    growsAtEnd: boolean,
    ax: number,
    ay: number,
    bx: number,
    by: number,
  ): void {
    const { pieces, slackMm } = this.draft;
    const c = pieces.centreline[piece];
    const from = this.kept.from[c];
    const to = this.kept.to[c];
    const start = pieces.start[piece];
    const end = start + pieces.length[piece];
    const low = growsAtStart ? start : Math.max(start, from);
    const high = growsAtEnd ? end : Math.min(end, to);
    const outOf = (end: number): Rounding => sectorTo(pieces.outX[end], pieces.outY[end]);
    const ux = (pieces.x2[piece] - pieces.x1[piece]) / pieces.length[piece];
    const uy = (pieces.y2[piece] - pieces.y1[piece]) / pieces.length[piece];
    this.addShape(into, c, low, high, ax, ay, bx, by, {
      atStart: growsAtStart
        ? outOf(2 * c)
        : low === start
          ? roundingAt(pieces, piece, -1, this.ends, slackMm, from, to)
          : null,
      atEnd: growsAtEnd
        ? outOf(2 * c + 1)
        : high === end
          ? roundingAt(pieces, piece, 1, this.ends, slackMm, from, to)
          : null,
    });
    if (growsAtStart) {
      const atStart = roundingAtSeam(pieces, 2 * c, this.ends, slackMm);
      this.addShape(into, c, from, start, ax, ay, bx, by, { atStart, atEnd: sectorTo(ux, uy) });
    }
    if (growsAtEnd) {
      const atEnd = roundingAtSeam(pieces, 2 * c + 1, this.ends, slackMm);
      this.addShape(into, c, end, to, ax, ay, bx, by, { atStart: sectorTo(-ux, -uy), atEnd });
    }
  }

  /** The straight piece of a centreline between two positions. */
  private addShape(
    into: number[],
    c: number,
    from: number,
    to: number,
    ax: number,
    ay: number,
    bx: number,
    by: number,
    round: Pick<PieceShape, 'atStart' | 'atEnd'>,
  ): void {
    const { draft } = this;
    const p = { x: 0, y: 0 };
    const q = { x: 0, y: 0 };
    pointAt(draft, c, from, p);
    pointAt(draft, c, to, q);
    const length = Math.hypot(q.x - p.x, q.y - p.y);
    if (length === 0) return;
    const half = draft.pieces.half[pieceAt(draft.pieces, c, Math.max(0, from))];
    const shape: PieceShape = { px: p.x, py: p.y, qx: q.x, qy: q.y, length, half, ...round, ...STRAIGHT };
    addShapeStretches(into, shape, ax, ay, bx, by, draft.slackMm);
  }
}
