import type { Chip } from '../chip/types.ts';
import type { Nearness } from '../geometry/near.ts';
import { nearestShare, placeOn } from '../geometry/on-piece.ts';
import { endPiece, type Pieces, pieceAt } from '../geometry/pieces.ts';

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

  constructor(count: number) {
    for (let node = 0; node < count; node++) this.add();
  }

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

/** Far below anything drawn, far above rounding: nearer is one place; a piece as short would have no direction. */
export const ROUNDING_MM = 1e-9;

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
  const x = new Float64Array(n);
  const y = new Float64Array(n);
  for (let e = 0; e < n; e++) {
    const piece = endPiece(pieces, e);
    x[e] = (e & 1) === 0 ? pieces.x1[piece] : pieces.x2[piece];
    y[e] = (e & 1) === 0 ? pieces.y1[piece] : pieces.y2[piece];
  }
  return {
    x,
    y,
    state: new Uint8Array(n),
    extension: new Float64Array(n),
    tipX: x.slice(),
    tipY: y.slice(),
    joinedTo: new Int32Array(n).fill(-1),
  };
}

/** Position of an end on its centreline, its carried-on piece included. */
export function endPosition({ pieces, ends }: Draft, end: number): number {
  return (end & 1) === 0 ? -ends.extension[end] : pieces.centrelineLength[end >> 1] + ends.extension[end];
}

/** Position of an end on its centreline as drawn. */
export function drawnPosition({ pieces }: Draft, end: number): number {
  return (end & 1) === 0 ? 0 : pieces.centrelineLength[end >> 1];
}

/**
 * Whether a piece of the end's own centreline passes it more than two widths back along it: only there may it be joined as
 * another channel is (rule 3).
 */
export function isFarBack(draft: Draft, end: number, piece: number): boolean {
  const { pieces, ends } = draft;
  const { s } = placeOn(pieces, piece, nearestShare(pieces, piece, ends.x[end], ends.y[end]));
  return Math.abs(s - endPosition(draft, end)) > 4 * pieces.half[piece];
}

/** A point of the drawing, mm. */
export interface Point {
  readonly x: number;
  readonly y: number;
}

/** Point of a centreline at position s; beyond the drawn ends on the carried-on piece. Hot loops give the object to write to. */
export function pointAt(draft: Draft, c: number, s: number, out = { x: 0, y: 0 }): Point {
  const { pieces, ends } = draft;
  const length = pieces.centrelineLength[c];
  if (s < 0 || s > length) {
    const e = s < 0 ? 2 * c : 2 * c + 1;
    const beyond = s < 0 ? -s : s - length;
    const share = ends.extension[e] > 0 ? beyond / ends.extension[e] : 0;
    out.x = ends.x[e] + share * (ends.tipX[e] - ends.x[e]);
    out.y = ends.y[e] + share * (ends.tipY[e] - ends.y[e]);
    return out;
  }
  const i = pieceAt(pieces, c, s);
  const t = Math.min(1, Math.max(0, (s - pieces.start[i]) / pieces.length[i]));
  out.x = pieces.x1[i] + t * (pieces.x2[i] - pieces.x1[i]);
  out.y = pieces.y1[i] + t * (pieces.y2[i] - pieces.y1[i]);
  return out;
}

/** Whether an end was carried on in its own direction, to within the slack. */
export function isCarriedStraightOn({ pieces, ends, slackMm }: Draft, end: number): boolean {
  const dx = ends.tipX[end] - ends.x[end];
  const dy = ends.tipY[end] - ends.y[end];
  const along = dx * pieces.outX[end] + dy * pieces.outY[end];
  return along > 0 && Math.abs(dx * pieces.outY[end] - dy * pieces.outX[end]) <= slackMm;
}
