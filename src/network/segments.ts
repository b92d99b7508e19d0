import { pieceAt } from '../geometry/pieces.ts';
import type { Arcs } from './arcs.ts';
import { type Draft, type Point, pointAt } from './draft.ts';
import { countedLength, type Trims } from './trims.ts';
import type { Network } from './types.ts';

/** Two straight pieces that turn by less than this are one segment. */
const COLLINEAR_SINE = 1e-9;

/** The straight pieces of reaches. */
export type Segments = Pick<
  Network,
  | 'firstSegment'
  | 'segmentCount'
  | 'segmentReach'
  | 'segmentX1'
  | 'segmentY1'
  | 'segmentX2'
  | 'segmentY2'
  | 'segmentDuctMm'
  | 'segmentBendRadiusMm'
>;

/** Scratch points: one is asked for at either end of every arc of the chip. */
const FROM = { x: 0, y: 0 };
const TO = { x: 0, y: 0 };

/** Writes the segments of one reach after another, arc by arc. */
export class SegmentWriter {
  private readonly draft: Draft;
  private readonly arcs: Arcs;
  private readonly trims: Trims;
  private factors: Float64Array = new Float64Array(0);
  private readonly firstSegment: number[] = [];
  private readonly reach: number[] = [];
  private readonly x1: number[] = [];
  private readonly y1: number[] = [];
  private readonly x2: number[] = [];
  private readonly y2: number[] = [];
  private readonly ductMm: number[] = [];
  private readonly bendRadius: number[] = [];

  constructor(draft: Draft, arcs: Arcs, trims: Trims) {
    this.draft = draft;
    this.arcs = arcs;
    this.trims = trims;
  }

  columns(): Segments {
    return {
      firstSegment: new Int32Array([...this.firstSegment, this.reach.length]),
      segmentCount: this.reach.length,
      segmentReach: new Int32Array(this.reach),
      segmentX1: new Float64Array(this.x1),
      segmentY1: new Float64Array(this.y1),
      segmentX2: new Float64Array(this.x2),
      segmentY2: new Float64Array(this.y2),
      segmentDuctMm: new Float64Array(this.ductMm),
      segmentBendRadiusMm: new Float64Array(this.bendRadius),
    };
  }

  /** What follows is the next reach, whose trims count with these factors. */
  beginReach(factors: Float64Array): void {
    this.factors = factors;
    this.firstSegment.push(this.reach.length);
  }

  /** Adds the straight pieces of the arc that the reach enters by a side, each with the length that counts. */
  addArc(side: number): void {
    const { pieces } = this.draft;
    const arc = side >> 1;
    const isReversed = (side & 1) === 1;
    const c = this.arcs.arcCentreline[arc];
    const [from, to] = [this.arcs.arcFrom[arc], this.arcs.arcTo[arc]];
    // Most arcs lie on one piece.
    const piece = pieceAt(pieces, c, from);
    if (from >= pieces.start[piece] && to <= pieces.start[piece] + pieces.length[piece]) {
      this.addStretch(c, from, to, isReversed, pieces.bendRadius[piece]);
      return;
    }
    const { cuts, radii } = cutArc(this.draft, c, from, to);
    const n = radii.length;
    for (let k = 0; k < n; k++) {
      const i = isReversed ? n - 1 - k : k;
      this.addStretch(c, cuts[i], cuts[i + 1], isReversed, radii[i]);
    }
  }

  private addStretch(c: number, start: number, stop: number, isReversed: boolean, radius: number): void {
    const counted = countedLength(this.trims, this.factors, c, start, stop);
    pointAt(this.draft, c, isReversed ? stop : start, FROM);
    pointAt(this.draft, c, isReversed ? start : stop, TO);
    this.add(FROM, TO, counted, radius);
  }

  private add(from: Point, to: Point, ductMm: number, bendRadius: number): void {
    const last = this.reach.length - 1;
    const isFirst = last < this.firstSegment[this.firstSegment.length - 1];
    if (!isFirst && bendRadius === 0 && this.bendRadius[last] === 0) {
      const ux = this.x2[last] - this.x1[last];
      const uy = this.y2[last] - this.y1[last];
      const vx = to.x - from.x;
      const vy = to.y - from.y;
      const product = Math.hypot(ux, uy) * Math.hypot(vx, vy);
      if (Math.abs(ux * vy - uy * vx) <= COLLINEAR_SINE * product && ux * vx + uy * vy > 0) {
        this.x2[last] = to.x;
        this.y2[last] = to.y;
        this.ductMm[last] += ductMm;
        return;
      }
    }
    this.reach.push(this.firstSegment.length - 1);
    this.x1.push(from.x);
    this.y1.push(from.y);
    this.x2.push(to.x);
    this.y2.push(to.y);
    this.ductMm.push(ductMm);
    this.bendRadius.push(bendRadius);
  }
}

/** Cuts a stretch of a centreline at its vertices: the positions, and the bend radius between each and the next. */
function cutArc({ pieces }: Draft, c: number, from: number, to: number) {
  const cuts = [from];
  const radii: number[] = [];
  const length = pieces.centrelineLength[c];
  const cutAt = (position: number, radius: number): void => {
    if (position - cuts[cuts.length - 1] <= 0) return;
    cuts.push(position);
    radii.push(radius);
  };
  if (from < 0) cutAt(Math.min(0, to), 0);
  if (to > 0 && cuts[cuts.length - 1] < length) {
    const last = pieces.firstPiece[c + 1] - 1;
    for (let i = pieceAt(pieces, c, cuts[cuts.length - 1]); i <= last; i++) {
      // A chord is one segment, however finely it was cut for its walls.
      if (i < last && pieces.chord[i + 1] === pieces.chord[i] && pieces.start[i + 1] < to) continue;
      cutAt(Math.min(to, i === last ? length : pieces.start[i + 1]), pieces.bendRadius[i]);
      if (cuts[cuts.length - 1] >= to) break;
    }
  }
  cutAt(to, 0);
  return { cuts, radii };
}
