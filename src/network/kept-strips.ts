import { endPiece } from '../geometry/pieces.ts';
import { type Rounding, sectorTo } from '../geometry/rounding.ts';
import {
  addShapeStretches,
  addStripStretches,
  type Line,
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

  /** Adds the stretches of a line that lie in the strip of one piece. */
  addStretches(into: number[], piece: number, line: Line): void {
    const { pieces, slackMm } = this.draft;
    const shapes = this.changedShapes(piece);
    if (shapes === null) {
      const { from, to } = this.placeOf(piece);
      addStripStretches(into, pieces, piece, line, slackMm, this.ends, from, to);
    } else for (const shape of shapes) addShapeStretches(into, shape, line, slackMm);
  }

  /** What the strip of a piece is made of where joining changed it; null where it is as drawn. */
  private changedShapes(piece: number): PieceShape[] | null {
    const { pieces } = this.draft;
    const { c, from, to, start, end } = this.placeOf(piece);
    const growsAtStart =
      piece === endPiece(pieces, 2 * c) && from < 0 && isCarriedStraightOn(this.draft, 2 * c);
    const growsAtEnd =
      piece === endPiece(pieces, 2 * c + 1) && to > end && isCarriedStraightOn(this.draft, 2 * c + 1);
    const startMoves = from > start || growsAtStart;
    const endMoves = to < end || growsAtEnd;
    if (pieces.centrelineClosed[c] === 1 || !(startMoves || endMoves)) return null;
    if (to <= start || from >= end) return [];
    if (pieces.bulge[piece] > 0 && (growsAtStart || growsAtEnd)) {
      return this.shapesBesideCurve(piece, growsAtStart, growsAtEnd);
    }
    return this.shape(
      c,
      startMoves ? from : start,
      endMoves ? to : end,
      startMoves ? this.seamRounding(2 * c) : this.vertexRounding(piece, -1),
      endMoves ? this.seamRounding(2 * c + 1) : this.vertexRounding(piece, 1),
    );
  }

  /** A curve carried on straight turns a little where it is: its piece and what was carried on are two straight pieces. */
  private shapesBesideCurve(piece: number, growsAtStart: boolean, growsAtEnd: boolean): PieceShape[] {
    const { pieces } = this.draft;
    const { c, from, to, start, end } = this.placeOf(piece);
    const low = growsAtStart ? start : Math.max(start, from);
    const high = growsAtEnd ? end : Math.min(end, to);
    const outOf = (end: number): Rounding => sectorTo(pieces.outX[end], pieces.outY[end]);
    const ux = (pieces.x2[piece] - pieces.x1[piece]) / pieces.length[piece];
    const uy = (pieces.y2[piece] - pieces.y1[piece]) / pieces.length[piece];
    const atLow = low === start ? this.vertexRounding(piece, -1) : null;
    const atHigh = high === end ? this.vertexRounding(piece, 1) : null;
    const shapes = this.shape(
      c,
      low,
      high,
      growsAtStart ? outOf(2 * c) : atLow,
      growsAtEnd ? outOf(2 * c + 1) : atHigh,
    );
    if (growsAtStart) shapes.push(...this.shape(c, from, start, this.seamRounding(2 * c), sectorTo(ux, uy)));
    if (growsAtEnd) shapes.push(...this.shape(c, end, to, sectorTo(-ux, -uy), this.seamRounding(2 * c + 1)));
    return shapes;
  }

  /** What of a piece's centreline is kept, and where on it the piece lies. */
  private placeOf(piece: number) {
    const { centreline, start, length } = this.draft.pieces;
    const c = centreline[piece];
    const [from, to] = [this.kept.from[c], this.kept.to[c]];
    return { c, from, to, start: start[piece], end: start[piece] + length[piece] };
  }

  private seamRounding(end: number): Rounding | null {
    return roundingAtSeam(this.draft.pieces, end, this.ends, this.draft.slackMm);
  }

  private vertexRounding(piece: number, side: -1 | 1): Rounding | null {
    const { pieces, slackMm } = this.draft;
    const { from, to } = this.placeOf(piece);
    return roundingAt(pieces, piece, side, this.ends, slackMm, from, to);
  }

  /** The straight piece of a centreline between two positions; none without length. */
  private shape(
    c: number,
    from: number,
    to: number,
    atStart: Rounding | null,
    atEnd: Rounding | null,
  ): PieceShape[] {
    const { draft } = this;
    const p = pointAt(draft, c, from);
    const q = pointAt(draft, c, to);
    const length = Math.hypot(q.x - p.x, q.y - p.y);
    if (length === 0) return [];
    const half = draft.pieces.half[draft.pieces.firstPiece[c]];
    return [{ px: p.x, py: p.y, qx: q.x, qy: q.y, length, half, atStart, atEnd, ...STRAIGHT }];
  }
}
