import type { Port } from '../chip/types.ts';
import { piecesNear } from '../geometry/near.ts';
import { besidePiece, distanceToPiece, nearestShare, placeOn } from '../geometry/on-piece.ts';
import { endPiece, type Pieces } from '../geometry/pieces.ts';
import { ROUND, type Rounding } from '../geometry/rounding.ts';
import { roundingAt } from '../geometry/strip.ts';
import { type Draft, END_IN_PORT, endPosition } from './draft.ts';

/**
 * Rule 6: all centreline inside a port's circle is open well. An end inside it joins that port. A centreline that only
 * touches the rim joins there; a strip that the circle overlaps without reaching its centreline joins at the
 * centreline's nearest point. A port opens every plane that it touches.
 *
 * Cost: one index query per port and the pieces it returns.
 */
export function markWells(draft: Draft): void {
  draft.chip.ports.forEach((port, p) => {
    markWell(draft, port, p);
  });
}

function markWell(draft: Draft, port: Port, p: number): void {
  const { near, pieces, slackMm } = draft;
  const r = port.radiusMm + slackMm;
  const found = near.index.search(port.xMm - r, port.yMm - r, port.xMm + r, port.yMm + r);
  const overlapped: Overlapped = new Map();
  const reached = new Set<number>();
  for (const i of found) {
    const c = pieces.centreline[i];
    if (markInside(draft, port, p, i)) {
      reached.add(c);
      continue;
    }
    const distance = distanceToPiece(pieces, i, port.xMm, port.yMm);
    if (distance > port.radiusMm + pieces.half[i] + slackMm) continue;
    const known = overlapped.get(c);
    if ((known === undefined || distance < known.distance) && circleTouchesStrip(draft, port, i)) {
      overlapped.set(c, { piece: i, distance });
    }
  }
  for (const [c, { piece }] of overlapped) {
    if (reached.has(c)) continue;
    const { s } = placeOn(pieces, piece, nearestShare(pieces, piece, port.xMm, port.yMm));
    if (goesOnNearer(draft, overlapped, reached, c, s)) continue;
    draft.marks.addWell(c, s, s, p);
    markEndReached(draft, c, s, s);
  }
}

/** Centreline → nearest piece of a strip that the circle overlaps. */
type Overlapped = Map<number, { readonly piece: number; readonly distance: number }>;

/**
 * Whether the nearest point of an overlapped centreline is its very end, and another one that the circle reaches or comes
 * nearer to passes there: a stroke drawn in two is touched where the same stroke drawn in one would be.
 */
function goesOnNearer(
  draft: Draft,
  overlapped: Overlapped,
  reached: ReadonlySet<number>,
  c: number,
  s: number,
): boolean {
  const { near, pieces, ends, slackMm } = draft;
  const end = endAt(pieces, c, s);
  if (end < 0) return false;
  const distance = overlapped.get(c)?.distance ?? 0;
  return piecesNear(near, endPiece(pieces, end)).some((i) => {
    const other = pieces.centreline[i];
    const nearer = overlapped.get(other)?.distance ?? Number.POSITIVE_INFINITY;
    if (other === c || !(reached.has(other) || nearer < distance || (nearer === distance && other < c)))
      return false;
    return distanceToPiece(pieces, i, ends.x[end], ends.y[end]) <= slackMm;
  });
}

/** Marks the stretch of one piece inside the circle (or touching it within slack); false when there is none. */
function markInside(draft: Draft, port: Port, p: number, i: number): boolean {
  const { pieces, slackMm, ends } = draft;
  const c = pieces.centreline[i];
  const { ux, uy, along, across } = besidePiece(pieces, i, port.xMm, port.yMm);
  const halfChordSquared = (port.radiusMm - across) * (port.radiusMm + across);
  if (halfChordSquared > 0) {
    const halfChord = Math.sqrt(halfChordSquared);
    const from = Math.max(0, along - halfChord);
    const to = Math.min(pieces.length[i], along + halfChord);
    if (from <= to) {
      draft.marks.addWell(c, pieces.start[i] + from, pieces.start[i] + to, p);
      markEndReached(draft, c, pieces.start[i] + from, pieces.start[i] + to);
      return true;
    }
  }
  const t = Math.min(pieces.length[i], Math.max(0, along));
  const px = pieces.x1[i] + t * ux - port.xMm;
  const py = pieces.y1[i] + t * uy - port.yMm;
  const gap = Math.hypot(px, py) - port.radiusMm;
  if (gap > slackMm) return false;
  const s = pieces.start[i] + t;
  const end = endAt(pieces, c, s);
  if (end >= 0 && ends.state[end] !== END_IN_PORT) {
    // Drawn short of the rim by less than the slack: carried on to the exact rim.
    ends.state[end] = END_IN_PORT;
    ends.extension[end] = Math.max(0, gap);
    const share = port.radiusMm / (port.radiusMm + gap);
    ends.tipX[end] = port.xMm + px * share;
    ends.tipY[end] = port.yMm + py * share;
    const position = endPosition(draft, end);
    draft.marks.addWell(c, position, position, p);
  } else {
    draft.marks.addWell(c, s, s, p);
  }
  return true;
}

/** The end at a position of an open centreline, −1 for any other place. */
function endAt({ centrelineClosed, centrelineLength }: Pieces, c: number, s: number): number {
  if (centrelineClosed[c] === 1) return -1;
  return s === 0 ? 2 * c : s === centrelineLength[c] ? 2 * c + 1 : -1;
}

/** An end inside a port's circle joins that port and nothing else. */
function markEndReached(draft: Draft, c: number, from: number, to: number): void {
  const { pieces, ends } = draft;
  if (pieces.centrelineClosed[c] === 1) return;
  if (from <= 0) ends.state[2 * c] = END_IN_PORT;
  if (to >= pieces.centrelineLength[c]) ends.state[2 * c + 1] = END_IN_PORT;
}

/** Whether circle and strip of one piece have a point in common: the strip's nearest point to the centre decides. */
function circleTouchesStrip(draft: Draft, port: Port, i: number): boolean {
  const { pieces, slackMm } = draft;
  const { ux, uy, ...at } = besidePiece(pieces, i, port.xMm, port.yMm);
  const length = pieces.length[i];
  const along = Math.min(length, Math.max(0, at.along));
  const clamped = Math.min(pieces.half[i], Math.max(-pieces.half[i], at.across));
  const nx = pieces.x1[i] + along * ux - clamped * uy;
  const ny = pieces.y1[i] + along * uy + clamped * ux;
  if (Math.hypot(nx - port.xMm, ny - port.yMm) <= port.radiusMm + slackMm) return true;
  // Outside the corner of an inner vertex the strip is round: the distance to the vertex, already compared, decides; where it
  // is but a sector, the centre must lie before it too, or the next piece decides.
  const isBefore = (rounding: Rounding | null, vertexX: number, vertexY: number): boolean =>
    rounding !== null &&
    (rounding === ROUND ||
      (port.xMm - vertexX) * rounding.onX + (port.yMm - vertexY) * rounding.onY <= slackMm);
  if (along === 0) return isBefore(roundingAt(pieces, i, -1, null, slackMm), pieces.x1[i], pieces.y1[i]);
  const atEnd = along === length ? roundingAt(pieces, i, 1, null, slackMm) : null;
  return isBefore(atEnd, pieces.x2[i], pieces.y2[i]);
}
