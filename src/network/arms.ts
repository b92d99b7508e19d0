import type { Channel } from '../chip/types.ts';
import { pieceAt } from '../geometry/pieces.ts';
import type { Arcs } from './arcs.ts';
import { type Draft, pointAt } from './draft.ts';

/** A duct as it leaves a node. */
export interface Arm {
  /** Of its arc: 2a at from, 2a + 1 at to. */
  readonly side: number;
  readonly channel: Channel;
  /** Unit vector out of the node. */
  readonly dx: number;
  readonly dy: number;
}

export function toArm(draft: Draft, arcs: Arcs, side: number): Arm {
  const [dx, dy] = firstStep(draft, arcs, side);
  const length = Math.hypot(dx, dy);
  return { side, channel: channelOf(draft, arcs, side >> 1), dx: dx / length, dy: dy / length };
}

export function channelOf({ chip, pieces }: Draft, { arcCentreline }: Arcs, arc: number): Channel {
  return chip.channels[pieces.centrelineChannel[arcCentreline[arc]]];
}

/** The angle that two arms enclose, 0 … π. */
export function angleBetween(a: Arm, b: Arm): number {
  return Math.atan2(Math.abs(a.dx * b.dy - a.dy * b.dx), a.dx * b.dx + a.dy * b.dy);
}

/** Scratch points of firstStep, which is asked for every arm of the chip. */
const HERE = { x: 0, y: 0 };
const THERE = { x: 0, y: 0 };

/** From a side of an arc to its next vertex, away from the node; and the bend radius there, 0 where it is straight. */
export function firstStep(draft: Draft, arcs: Arcs, side: number): readonly [number, number, number] {
  const arc = side >> 1;
  const c = arcs.arcCentreline[arc];
  const atFrom = (side & 1) === 0;
  const position = atFrom ? arcs.arcFrom[arc] : arcs.arcTo[arc];
  const vertex = nextVertex(draft, arcs, arc, position, atFrom);
  pointAt(draft, c, position, HERE);
  pointAt(draft, c, vertex, THERE);
  const middle = (position + vertex) / 2;
  const isDrawn = middle >= 0 && middle <= draft.pieces.centrelineLength[c];
  const radius = isDrawn ? draft.pieces.bendRadius[pieceAt(draft.pieces, c, middle)] : 0;
  return [THERE.x - HERE.x, THERE.y - HERE.y, radius];
}

/**
 * Position of the first vertex (or end of the arc) more than the slack beyond a position, walking away from the node: a
 * vertex nearer than that is the node itself, drawn a hair off.
 */
function nextVertex(draft: Draft, arcs: Arcs, arc: number, position: number, forward: boolean): number {
  const { pieces, slackMm } = draft;
  const c = arcs.arcCentreline[arc];
  const length = pieces.centrelineLength[c];
  const limit = forward ? arcs.arcTo[arc] : arcs.arcFrom[arc];
  const beyond = forward ? position + slackMm : position - slackMm;
  if (forward) {
    if (beyond >= limit || beyond >= length) return limit;
    if (beyond < 0) return Math.min(0, limit);
    const piece = pieceAt(pieces, c, beyond);
    return Math.min(pieces.start[piece] + pieces.length[piece], limit);
  }
  if (beyond <= limit || beyond <= 0) return limit;
  if (beyond > length) return Math.max(length, limit);
  const piece = pieceAt(pieces, c, beyond);
  const vertex = pieces.start[piece] < beyond || piece === pieces.firstPiece[c] ? piece : piece - 1;
  return Math.max(pieces.start[vertex], limit);
}
