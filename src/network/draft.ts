import type { Chip } from '../chip/types.ts';
import type { Nearness } from '../geometry/near.ts';
import { type Pieces, pieceAt } from '../geometry/pieces.ts';

/**
 * The network while it is being built: the drawn pieces, what was found on each centreline, and which nodes are one.
 * Each step of build.ts fills one part; nothing outside network/ sees a draft.
 */
export interface Draft {
  readonly chip: Chip;
  readonly near: Nearness;
  readonly pieces: Pieces;
  readonly slackMm: number;
  readonly nodes: NodeUnion;
  readonly marks: Marks;
  readonly ends: CentrelineEnds;
  /** Node of each port, made first: port p is node p. */
  readonly portCount: number;
}

/** Places on centrelines that belong to a node: a point, or the stretch of open well of a port. */
export class Marks {
  readonly centreline: number[] = [];
  /** Positions on the centreline; from = to at a meeting, from … to is open well at a port. */
  readonly from: number[] = [];
  readonly to: number[] = [];
  readonly node: number[] = [];
  /** Port whose well the stretch is, −1 at a meeting. */
  readonly port: number[] = [];

  addMeeting(centreline: number, s: number, node: number): void {
    this.add(centreline, s, s, node, -1);
  }

  addWell(centreline: number, from: number, to: number, port: number): void {
    this.add(centreline, from, to, port, port);
  }

  private add(centreline: number, from: number, to: number, node: number, port: number): void {
    this.centreline.push(centreline);
    this.from.push(from);
    this.to.push(to);
    this.node.push(node);
    this.port.push(port);
  }
}

/** Union-find over nodes; the smallest index of a set stands for it, so ports keep theirs. */
export class NodeUnion {
  private readonly parent: number[] = [];

  get size(): number {
    return this.parent.length;
  }

  add(): number {
    this.parent.push(this.parent.length);
    return this.parent.length - 1;
  }

  find(node: number): number {
    const { parent } = this;
    while (parent[node] !== node) {
      parent[node] = parent[parent[node]];
      node = parent[node];
    }
    return node;
  }

  unite(a: number, b: number): void {
    const rootA = this.find(a);
    const rootB = this.find(b);
    if (rootA < rootB) this.parent[rootB] = rootA;
    else this.parent[rootA] = rootB;
  }
}

export const END_FREE = 0;
export const END_JOINED = 1;
export const END_IN_PORT = 2;

/**
 * Both ends of every open centreline: end 2c is the start of centreline c, 2c + 1 its last point.
 * An end may be carried on in a straight piece (rules 3 and 6): the centreline then starts at −extension or runs to
 * length + extension.
 */
export interface CentrelineEnds {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Unit vector in which the end points, out of the channel. */
  readonly outX: Float64Array;
  readonly outY: Float64Array;
  readonly state: Uint8Array;
  readonly extension: Float64Array;
  /** Where the carried-on piece ends. */
  readonly tipX: Float64Array;
  readonly tipY: Float64Array;
  /** The centreline that the end was carried on to, −1 for none. */
  readonly joinedTo: Int32Array;
}

export function toEnds(pieces: Pieces): CentrelineEnds {
  const n = 2 * pieces.centrelineCount;
  const ends: CentrelineEnds = {
    x: new Float64Array(n),
    y: new Float64Array(n),
    outX: new Float64Array(n),
    outY: new Float64Array(n),
    state: new Uint8Array(n),
    extension: new Float64Array(n),
    tipX: new Float64Array(n),
    tipY: new Float64Array(n),
    joinedTo: new Int32Array(n).fill(-1),
  };
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const first = pieces.firstPiece[c];
    const last = pieces.firstPiece[c + 1] - 1;
    setEnd(ends, 2 * c, pieces, pieces.x1[first], pieces.y1[first]);
    setEnd(ends, 2 * c + 1, pieces, pieces.x2[last], pieces.y2[last]);
  }
  return ends;
}

function setEnd(ends: CentrelineEnds, e: number, pieces: Pieces, x: number, y: number): void {
  ends.x[e] = x;
  ends.y[e] = y;
  ends.outX[e] = pieces.outX[e];
  ends.outY[e] = pieces.outY[e];
  ends.tipX[e] = x;
  ends.tipY[e] = y;
}

/** Position of an end on its centreline, its carried-on piece included. */
export function endPosition(draft: Draft, end: number): number {
  const c = end >> 1;
  return (end & 1) === 0
    ? -draft.ends.extension[end]
    : draft.pieces.centrelineLength[c] + draft.ends.extension[end];
}

/** Position of an end on its centreline as drawn. */
export function drawnPosition({ pieces }: Draft, end: number): number {
  return (end & 1) === 0 ? 0 : pieces.centrelineLength[end >> 1];
}

/** The piece at an end. */
export function endPiece(pieces: Pieces, end: number): number {
  const c = end >> 1;
  return (end & 1) === 0 ? pieces.firstPiece[c] : pieces.firstPiece[c + 1] - 1;
}

/** Point of a centreline at position s; beyond the drawn ends on the carried-on piece. Writes into out. */
export function pointAt(draft: Draft, c: number, s: number, out: { x: number; y: number }): void {
  const { pieces, ends } = draft;
  const length = pieces.centrelineLength[c];
  if (s < 0 || s > length) {
    const e = s < 0 ? 2 * c : 2 * c + 1;
    const beyond = s < 0 ? -s : s - length;
    const share = ends.extension[e] > 0 ? beyond / ends.extension[e] : 0;
    out.x = ends.x[e] + share * (ends.tipX[e] - ends.x[e]);
    out.y = ends.y[e] + share * (ends.tipY[e] - ends.y[e]);
    return;
  }
  const i = pieceAt(pieces, c, s);
  const t = Math.min(1, Math.max(0, (s - pieces.start[i]) / pieces.length[i]));
  out.x = pieces.x1[i] + t * (pieces.x2[i] - pieces.x1[i]);
  out.y = pieces.y1[i] + t * (pieces.y2[i] - pieces.y1[i]);
}

/** Whether an end was carried on in its own direction, to within the slack. */
export function isCarriedStraightOn({ ends, slackMm }: Draft, end: number): boolean {
  const dx = ends.tipX[end] - ends.x[end];
  const dy = ends.tipY[end] - ends.y[end];
  const along = dx * ends.outX[end] + dy * ends.outY[end];
  return along > 0 && Math.abs(dx * ends.outY[end] - dy * ends.outX[end]) <= slackMm;
}
