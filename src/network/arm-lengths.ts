import { type Pieces, pieceAt } from '../geometry/pieces.ts';
import type { Groups } from '../groups.ts';
import type { Arcs } from './arcs.ts';
import { channelOf, firstStep } from './arms.ts';
import type { Draft } from './draft.ts';
import { ANGLE_TOLERANCE_RAD, turnBetween } from './turns.ts';

/** A dead end of this many widths behaves as closed. */
const DEAD_END_WIDTHS = 3;

/** All arms of a chip: how arcs meet, and go on in each other. */
export interface Arms {
  readonly draft: Draft;
  readonly arcs: Arcs;
  /** Sides of arcs by node. */
  readonly sides: Groups;
  /** The side that each side of an arc goes on in through a seam, −1 for none. */
  readonly seams: Int32Array;
}

/**
 * Whether the arm is free of other joints for `apartMm` beyond `wallMm` from the node: of nodes where channels meet,
 * rims and corners; and, where it ends dead, for three widths. Seams are walked through.
 */
export function isLongEnough(arms: Arms, side: number, apartMm: number, wallMm: number): boolean {
  const { draft, arcs, sides, seams } = arms;
  const { slackMm } = draft;
  const { ductWidthMm: width } = channelOf(draft, arcs, side >> 1);
  const need = wallMm + apartMm;
  const deadNeed = Math.max(need, wallMm + DEAD_END_WIDTHS * width);
  // A bend has no meeting point; it begins where a mitre's square would: half a width before.
  let turnLeft = ANGLE_TOLERANCE_RAD;
  let walked = 0;
  for (let at = side; ; ) {
    const arc = at >> 1;
    const forward = (at & 1) === 0;
    const corner = walked + distanceToCorner(arms, arc, forward, deadNeed - walked);
    if (corner < need - slackMm) return false;
    turnLeft -= turnOfBends(arms, arc, forward, need - width / 2 - slackMm - walked);
    if (turnLeft < 0) return false;
    walked += arcs.arcTo[arc] - arcs.arcFrom[arc];
    if (walked >= deadNeed - slackMm) return true;
    const node = forward ? arcs.rootTo[arc] : arcs.rootFrom[arc];
    const degree = sides.first[node + 1] - sides.first[node];
    if (node >= draft.portCount && degree === 1) return false;
    const next = seams[at ^ 1];
    if (next < 0 || next === side) return walked >= need - slackMm;
    const isCorner = walked > slackMm && turnAtSeam(arms, at ^ 1, next) > ANGLE_TOLERANCE_RAD;
    if (isCorner) return walked >= need - slackMm;
    at = next;
  }
}

/** By how much the duct turns where one side goes on in another, without what belongs to curves. */
function turnAtSeam({ draft, arcs }: Arms, side: number, next: number): number {
  const [ux, uy, radius] = firstStep(draft, arcs, side);
  const [vx, vy, nextRadius] = firstStep(draft, arcs, next);
  return turnBetween(-ux, -uy, radius, vx, vy, nextRadius);
}

/** By how much curves turn the arm within a distance of its node. */
function turnOfBends({ draft, arcs }: Arms, arc: number, forward: boolean, within: number): number {
  const { pieces } = draft;
  const c = arcs.arcCentreline[arc];
  const start = forward ? arcs.arcFrom[arc] : Math.max(arcs.arcTo[arc] - within, arcs.arcFrom[arc]);
  const end = forward ? Math.min(arcs.arcFrom[arc] + within, arcs.arcTo[arc]) : arcs.arcTo[arc];
  const first = pieceAt(pieces, c, Math.min(Math.max(start, 0), pieces.centrelineLength[c]));
  let turn = 0;
  for (let piece = first; piece < pieces.firstPiece[c + 1] && pieces.start[piece] < end; piece++) {
    const radius = pieces.bendRadius[piece];
    if (radius === 0) continue;
    const from = Math.max(start, pieces.start[piece]);
    const to = Math.min(end, pieces.start[piece] + pieces.length[piece]);
    turn += Math.max(0, to - from) / radius;
  }
  return turn;
}

function distanceToCorner({ draft, arcs }: Arms, arc: number, forward: boolean, limit: number): number {
  const { pieces } = draft;
  const c = arcs.arcCentreline[arc];
  const start = forward ? arcs.arcFrom[arc] : arcs.arcTo[arc];
  const end = forward ? arcs.arcTo[arc] : arcs.arcFrom[arc];
  const length = pieces.centrelineLength[c];
  let piece = pieceAt(pieces, c, Math.min(Math.max(start, 0), length));
  if (!forward && pieces.start[piece] >= start && piece > pieces.firstPiece[c]) piece--;
  for (;;) {
    const vertex = forward ? pieces.start[piece] + pieces.length[piece] : pieces.start[piece];
    const walked = Math.abs(vertex - start);
    if (walked > limit || (forward ? vertex >= end : vertex <= end)) return Number.POSITIVE_INFINITY;
    const next = forward ? piece + 1 : piece - 1;
    if (next < pieces.firstPiece[c] || next >= pieces.firstPiece[c + 1]) return Number.POSITIVE_INFINITY;
    if (walked > draft.slackMm && turnAfter(pieces, Math.min(piece, next)) > ANGLE_TOLERANCE_RAD)
      return walked;
    piece = next;
  }
}

/** Turn at the vertex between a piece and the next, without what belongs to curves. */
function turnAfter(p: Pieces, i: number): number {
  const next = i + 1;
  return turnBetween(
    p.x2[i] - p.x1[i],
    p.y2[i] - p.y1[i],
    p.bendRadius[i],
    p.x2[next] - p.x1[next],
    p.y2[next] - p.y1[next],
    p.bendRadius[next],
  );
}
