import { besidePiece } from './on-piece.ts';
import { endsAtVertex, goesOnSmoothly, neighbourPiece, type Pieces, startsAtVertex } from './pieces.ts';
import { ROUND, type Rounding, roundingAtVertex } from './rounding.ts';

/**
 * The strip of a channel: the etched area within half its width of the centreline, round at inner vertices, square at
 * its ends. It is handled piece by piece: a rectangle along each piece and a round at each inner vertex (rounding.ts).
 *
 * Slack decides *whether* a point counts as inside; lengths are always measured to the exact wall or square end.
 */
export interface StripEnds {
  /** True where a centreline end is a seam: an equal strip goes on there, so the end is an inner vertex. Index 2c start, 2c + 1 end. */
  readonly seam: Uint8Array;
  /** The end that it makes the seam with, −1 for none or several. */
  readonly seamWith: Int32Array;
}

/** Whether the point is inside the part of the strip that belongs to one piece, within slack. */
export function isInPieceStrip(
  pieces: Pieces,
  piece: number,
  x: number,
  y: number,
  slackMm: number,
  ends: StripEnds | null,
): boolean {
  const half = pieces.half[piece] + slackMm;
  const length = pieces.length[piece];
  const { along, across } = besidePiece(pieces, piece, x, y);
  const [fromX, fromY] = [x - pieces.x1[piece], y - pieces.y1[piece]];
  const [beyondX, beyondY] = [x - pieces.x2[piece], y - pieces.y2[piece]];
  if (pieces.bulge[piece] > 0) {
    const { startOut, endOut } = cutEnds(pieces, piece, ends);
    const atStart = startOut === null ? -along : fromX * startOut[0] + fromY * startOut[1];
    const atEnd = endOut === null ? along - length : beyondX * endOut[0] + beyondY * endOut[1];
    if (Math.abs(across) <= half && atStart <= slackMm && atEnd <= slackMm) return true;
    if ((along < 0 ? startOut : endOut) !== null) return false;
  } else if (Math.abs(across) <= half && along >= -slackMm && along <= length + slackMm) return true;
  if (along < 0) return isInRound(roundingAt(pieces, piece, -1, ends, slackMm), fromX, fromY, half, slackMm);
  const rounding = along > length ? roundingAt(pieces, piece, 1, ends, slackMm) : null;
  return isInRound(rounding, beyondX, beyondY, half, slackMm);
}

/** Whether a place beyond the end of a piece, seen from there, lies in the round. */
function isInRound(rounding: Rounding | null, x: number, y: number, half: number, slackMm: number): boolean {
  if (rounding === null || Math.hypot(x, y) > half) return false;
  return rounding === ROUND || x * rounding.onX + y * rounding.onY <= Math.max(rounding.mostMm, slackMm);
}

/** A straight line: where it begins, its unit direction (none where it has no length) and how long it is, mm. */
export interface Line {
  readonly ax: number;
  readonly ay: number;
  readonly dx: number;
  readonly dy: number;
  readonly span: number;
}

/** The line a→b. */
export function lineTo(ax: number, ay: number, bx: number, by: number): Line {
  const span = Math.hypot(bx - ax, by - ay);
  return { ax, ay, dx: (bx - ax) / span, dy: (by - ay) / span, span };
}

/**
 * Adds to `into` the stretches [from, to] (distance along the line) of a line that lie inside the strip of one
 * piece. A stretch that leaves through a square end is cut at the exact end, also where slack let it in.
 */
export function addStripStretches(
  into: number[],
  pieces: Pieces,
  piece: number,
  line: Line,
  slackMm: number,
  ends: StripEnds | null,
  keptFrom = 0,
  keptTo = pieces.centrelineLength[pieces.centreline[piece]],
  growMm = 0,
): void {
  const shape: PieceShape = {
    px: pieces.x1[piece],
    py: pieces.y1[piece],
    qx: pieces.x2[piece],
    qy: pieces.y2[piece],
    length: pieces.length[piece],
    half: pieces.half[piece] + growMm,
    growMm,
    atStart: roundingAt(pieces, piece, -1, ends, slackMm, keptFrom, keptTo),
    atEnd: roundingAt(pieces, piece, 1, ends, slackMm, keptFrom, keptTo),
    ...(pieces.bulge[piece] > 0 ? cutEnds(pieces, piece, ends) : STRAIGHT),
  };
  addShapeStretches(into, shape, line, slackMm);
}

/** Directions out of a piece at ends that are cut straight, but not square to the piece; null where square, or round. */
export interface CutEnds {
  readonly startOut: readonly [number, number] | null;
  readonly endOut: readonly [number, number] | null;
}

export const STRAIGHT: CutEnds = { startOut: null, endOut: null };

/**
 * A curve's strip ends square to the curve, not to its last chord. Next to that end the pieces are mitred: a disc at a
 * place where the curve was only cut would reach beyond the end.
 */
function cutEnds(pieces: Pieces, piece: number, ends: StripEnds | null): CutEnds {
  const isMitred = isNextToCurvedEnd(pieces, piece);
  const outAt = (step: 1 | -1): readonly [number, number] | null => {
    if (isVertexAt(pieces, piece, step)) return isMitred ? mitre(pieces, piece, step) : null;
    const end = endAt(pieces, piece, step);
    return ends?.seam[end] === 1 ? null : [pieces.outX[end], pieces.outY[end]];
  };
  return { startOut: outAt(-1), endOut: outAt(1) };
}

/** The direction half-way between two pieces that go on smoothly in each other. */
function mitre(pieces: Pieces, piece: number, step: 1 | -1): readonly [number, number] | null {
  const next = neighbourPiece(pieces, piece, step);
  if (next < 0 || !goesOnSmoothly(pieces, piece, next) || pieces.bendRadius[next] <= pieces.half[next])
    return null;
  const x =
    (pieces.x2[piece] - pieces.x1[piece]) / pieces.length[piece] +
    (pieces.x2[next] - pieces.x1[next]) / pieces.length[next];
  const y =
    (pieces.y2[piece] - pieces.y1[piece]) / pieces.length[piece] +
    (pieces.y2[next] - pieces.y1[next]) / pieces.length[next];
  const length = Math.hypot(x, y) * step;
  return [x / length, y / length];
}

/** Whether a piece lies within half a width of an open end of its centreline, and all between is one curve, not a tight one. */
export function isNextToCurvedEnd(pieces: Pieces, piece: number): boolean {
  const c = pieces.centreline[piece];
  if (pieces.bulge[piece] === 0 || pieces.centrelineClosed[c] === 1) return false;
  const half = pieces.half[piece];
  const before = pieces.start[piece];
  const after = pieces.centrelineLength[c] - before - pieces.length[piece];
  return (
    (before < half && isOneCurve(pieces, pieces.firstPiece[c], piece)) ||
    (after < half && isOneCurve(pieces, piece, pieces.firstPiece[c + 1] - 1))
  );
}

function isOneCurve(pieces: Pieces, from: number, to: number): boolean {
  for (let k = from; k <= to; k++) {
    if (pieces.bendRadius[k] <= pieces.half[k]) return false;
    if (k > from && !goesOnSmoothly(pieces, k - 1, k)) return false;
  }
  return true;
}

/** One straight piece p→q of a strip: a rectangle, with a round at each end that is an inner vertex or a seam; null where square. */
export interface PieceShape extends CutEnds {
  readonly px: number;
  readonly py: number;
  readonly qx: number;
  readonly qy: number;
  readonly length: number;
  readonly half: number;
  /** How far square ends stand beyond p and q: 0 where lengths are measured. */
  readonly growMm?: number;
  readonly atStart: Rounding | null;
  readonly atEnd: Rounding | null;
}

/** The same for one shape. */
export function addShapeStretches(into: number[], shape: PieceShape, line: Line, slackMm: number): void {
  const { ax, ay, dx, dy, span } = line;
  if (span === 0) return;
  const { px, py, qx, qy, length, half, growMm = 0, atStart, atEnd, startOut, endOut } = shape;
  const startIsRound = atStart !== null;
  const endIsRound = atEnd !== null;
  const ux = (qx - px) / length;
  const uy = (qy - py) / length;
  // In the piece's own frame: u along, v across; the line is (u0 + t du, v0 + t dv).
  const u0 = (ax - px) * ux + (ay - py) * uy;
  const v0 = (ay - py) * ux - (ax - px) * uy;
  const du = dx * ux + dy * uy;
  const dv = dy * ux - dx * uy;

  const lateral = stretchWithin(v0, dv, -half, half, span);
  if (lateral !== null) {
    const low = -(startIsRound ? TINY_MM : slackMm);
    const high = endIsRound ? TINY_MM : slackMm;
    const along = between(low, high);
    if (along !== null) {
      const from = Math.max(lateral[0], along[0]);
      let to = Math.min(lateral[1], along[1]);
      const leavesThroughEnd = along[1] < lateral[1];
      if (leavesThroughEnd) {
        const exact = between(startIsRound ? low : -growMm, endIsRound ? high : growMm);
        to = exact === null ? from : Math.max(from, Math.min(to, exact[1]));
      }
      if (to >= from) into.push(from, to);
    }
  }
  if (atStart !== null && startOut === null) addRound(atStart, px, py, -ux, -uy);
  if (atEnd !== null && endOut === null) addRound(atEnd, qx, qy, ux, uy);

  /** The round at (x, y), where the piece ends in direction (outX, outY). */
  function addRound(rounding: Rounding, x: number, y: number, outX: number, outY: number): void {
    if (rounding === ROUND) {
      addDiscStretch(into, x, y, half, line);
      return;
    }
    const beyond = beside([-outX, -outY], x, y, TINY_MM);
    const before = beside([rounding.onX, rounding.onY], x, y, rounding.mostMm);
    if (beyond === null || before === null) return;
    const disc: number[] = [];
    addDiscStretch(disc, x, y, half, line);
    if (disc.length === 0) return;
    const from = Math.max(beyond[0], before[0], disc[0]);
    const to = Math.min(beyond[1], before[1], disc[1]);
    if (from <= to) into.push(from, to);
  }

  /** Not before the first end by more than −low, nor beyond the second by more than high. */
  function between(low: number, high: number): readonly [number, number] | null {
    if (startOut === null && endOut === null) return stretchWithin(u0, du, low, length + high, span);
    const after =
      startOut === null
        ? stretchWithin(u0, du, low, Number.POSITIVE_INFINITY, span)
        : beside(startOut, px, py, -low);
    const before =
      endOut === null
        ? stretchWithin(u0, du, Number.NEGATIVE_INFINITY, length + high, span)
        : beside(endOut, qx, qy, high);
    if (after === null || before === null) return null;
    const from = Math.max(after[0], before[0]);
    const to = Math.min(after[1], before[1]);
    return from <= to ? [from, to] : null;
  }

  /** Beyond (x, y) in a direction by no more than `most`. */
  function beside(out: readonly [number, number], x: number, y: number, most: number) {
    const w0 = (ax - x) * out[0] + (ay - y) * out[1];
    const dw = dx * out[0] + dy * out[1];
    return stretchWithin(w0, dw, Number.NEGATIVE_INFINITY, most, span);
  }
}

/** How far the stretches, taken together, reach without a gap from `from` on. Sorts `stretches` by start. */
export function coveredUpTo(stretches: readonly number[], from: number, slackMm: number): number {
  let reach = from;
  let entered = false;
  const order = [];
  for (let k = 0; k < stretches.length; k += 2) order.push(k);
  order.sort((a, b) => stretches[a] - stretches[b]);
  for (const k of order) {
    const gap = stretches[k] - reach;
    if (gap > (entered ? TINY_MM : slackMm)) break;
    if (stretches[k + 1] >= reach) {
      reach = stretches[k + 1];
      entered = true;
    }
  }
  return reach;
}

/** Far below any drawn length, far above rounding: gaps of this size between parts of one strip are no gaps. */
const TINY_MM = 1e-9;

/**
 * How the strip goes on beyond the first (step −1) or last point (1) of a piece; null where it ends square. `keptFrom` …
 * `keptTo` is what of the centreline is kept.
 */
export function roundingAt(
  pieces: Pieces,
  piece: number,
  step: 1 | -1,
  ends: StripEnds | null,
  slackMm: number,
  keptFrom = 0,
  keptTo = pieces.centrelineLength[pieces.centreline[piece]],
): Rounding | null {
  if (isVertexAt(pieces, piece, step)) return roundingAtVertex(pieces, piece, step, keptFrom, keptTo);
  return roundingAtSeam(pieces, endAt(pieces, piece, step), ends, slackMm);
}

function isVertexAt(pieces: Pieces, piece: number, step: 1 | -1): boolean {
  return step === -1 ? startsAtVertex(pieces, piece) : endsAtVertex(pieces, piece);
}

function endAt(pieces: Pieces, piece: number, step: 1 | -1): number {
  return 2 * pieces.centreline[piece] + (step === 1 ? 1 : 0);
}

/**
 * The round at a seam, null where the end is none. Where either stroke goes on for less than half a width it may end square
 * inside the disc, so only the sector between the two is round; the two ends may be a few slacks apart.
 */
export function roundingAtSeam(
  pieces: Pieces,
  end: number,
  ends: StripEnds | null,
  slackMm: number,
): Rounding | null {
  if (ends === null || ends.seam[end] !== 1) return null;
  const { centrelineLength, half, firstPiece, outX, outY } = pieces;
  const other = ends.seamWith[end];
  if (other < 0) return ROUND;
  const shorter = Math.min(centrelineLength[end >> 1], centrelineLength[other >> 1]);
  if (shorter >= half[firstPiece[end >> 1]]) return ROUND;
  return { onX: -outX[other], onY: -outY[other], mostMm: 2 * slackMm };
}

/** The t in [0, span] with low ≤ w0 + t dw ≤ high. */
function stretchWithin(
  w0: number,
  dw: number,
  low: number,
  high: number,
  span: number,
): readonly [number, number] | null {
  // Over the whole span a slope below this moves the line by less than rounding already has.
  if (Math.abs(dw) * span < 1e-13 * (1 + Math.abs(w0))) {
    return w0 >= low - TINY_MM && w0 <= high + TINY_MM ? [0, span] : null;
  }
  const t1 = (low - w0) / dw;
  const t2 = (high - w0) / dw;
  const from = Math.max(0, Math.min(t1, t2));
  const to = Math.min(span, Math.max(t1, t2));
  return from <= to ? [from, to] : null;
}

/** The same for a disc. */
export function addDiscStretch(into: number[], cx: number, cy: number, radius: number, line: Line): void {
  const { ax, ay, dx, dy, span } = line;
  const b = (cx - ax) * dx + (cy - ay) * dy;
  const across = (cy - ay) * dx - (cx - ax) * dy;
  const halfChordSquared = radius * radius - across * across;
  if (halfChordSquared < 0) return;
  const halfChord = Math.sqrt(halfChordSquared);
  const from = Math.max(0, b - halfChord);
  const to = Math.min(span, b + halfChord);
  if (from <= to) into.push(from, to);
}
