import type { Channel } from '../chip/types.ts';
import { endsAtVertex, pieceAt } from '../geometry/pieces.ts';
import { crossK, stepK, teeEqualK, teeIntoWideK } from '../physics/joints.ts';
import { type Arcs, sidesByNode } from './arcs.ts';
import { type Draft, pointAt } from './draft.ts';
import { isEqualDuct, isEqualSize } from './equal-ducts.ts';
import type { JointKind, JointTally } from './joint-types.ts';

/**
 * Rule 8, `joints: resolved`, at nodes: which computed case a junction or step is, what it adds to each arm, and what a
 * case that nobody computed could be off by. Corners and bends inside a reach are duct-joints.ts's.
 *
 * Cost: linear in the arms; the walk along an arm ends at the first corner or node.
 */
export interface NodeJoints {
  /** Signed length that the joint at an arc's side (2a at from, 2a + 1 at to) adds to it, mm. */
  readonly sideMm: Float64Array;
  /** Length by which that side could still be off, mm. */
  readonly sideBoundMm: Float64Array;
  /** By node root: how rule 5 is applied there. */
  readonly trimming: Uint8Array;
}

/** Rule 5 as written; no trimming (lengths run to the meeting point); narrow arms run to the wider strip's wall. */
export const TRIM_BY_RULE = 0;
export const TRIM_NOTHING = 1;
export const TRIM_TO_WALL = 2;

/** A T, cross or step within this angle of its computed one is that case. */
export const ANGLE_TOLERANCE_RAD = (5 * Math.PI) / 180;
/** Meeting points of two joints nearer than this many widths along the duct are no longer two joints by themselves. */
export const APART_WIDTHS = 1.98;
/** A dead end of this many widths behaves as closed. */
const DEAD_END_WIDTHS = 3;
/**
 * Estimated bound of an end correction that was not computed, in widths of the narrowest duct, while no two arms are nearer
 * than a right angle: no computed one is off centreline counting by more up to W = 10w (a step to 10w: 0.614).
 */
const UNKNOWN_K = 0.62;
/** Entry of creeping flow from a wide, deep well: half of Sampson's orifice is 0.59 radii of a tube, 0.41 widths of a deep slot. */
const WELL_K = 0.6;

interface Arm {
  readonly side: number;
  readonly channel: Channel;
  /** Unit vector out of the node. */
  readonly dx: number;
  readonly dy: number;
}

export function classifyNodes(draft: Draft, arcs: Arcs, tally: JointTally): NodeJoints {
  const sides = sidesByNode(draft, arcs);
  const joints: NodeJoints = {
    sideMm: new Float64Array(2 * arcs.count),
    sideBoundMm: new Float64Array(2 * arcs.count),
    trimming: new Uint8Array(draft.nodes.size),
  };
  const runs = new RunLengths(draft, arcs, sides);
  for (let node = 0; node + 1 < sides.first.length; node++) {
    const begin = sides.first[node];
    const end = sides.first[node + 1];
    if (begin === end) continue;
    const arms: Arm[] = [];
    for (let k = begin; k < end; k++) arms.push(toArm(draft, arcs, sides.side[k]));
    if (node < draft.portCount) markWell(draft, joints, tally, node, arms);
    else if (arms.length > 1 && !isThrough(arms)) classify(draft, joints, tally, runs, node, arms);
  }
  return joints;
}

/** Two arms of one duct: an inner point of a reach or a seam (rule 3), where duct-joints.ts looks for a corner. */
function isThrough(arms: readonly Arm[]): boolean {
  return arms.length === 2 && isEqualDuct(arms[0].channel, arms[1].channel);
}

/** Scratch points of firstStep, which is asked for every arm of the chip. */
const HERE = { x: 0, y: 0 };
const THERE = { x: 0, y: 0 };

function toArm(draft: Draft, arcs: Arcs, side: number): Arm {
  const [dx, dy] = firstStep(draft, arcs, side);
  const length = Math.hypot(dx, dy);
  return {
    side,
    channel: draft.chip.channels[draft.pieces.centrelineChannel[arcs.centreline[side >> 1]]],
    dx: dx / length,
    dy: dy / length,
  };
}

/** From a side of an arc to its next vertex, away from the node; and the bend radius there, 0 where it is straight. */
function firstStep(draft: Draft, arcs: Arcs, side: number): readonly [number, number, number] {
  const arc = side >> 1;
  const c = arcs.centreline[arc];
  const atFrom = (side & 1) === 0;
  const position = atFrom ? arcs.from[arc] : arcs.to[arc];
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
  const c = arcs.centreline[arc];
  const length = pieces.centrelineLength[c];
  const limit = forward ? arcs.to[arc] : arcs.from[arc];
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

function markWell(
  draft: Draft,
  joints: NodeJoints,
  tally: JointTally,
  node: number,
  arms: readonly Arm[],
): void {
  const port = draft.chip.ports[node];
  for (const arm of arms) {
    const { ductWidthMm: width, depthMm: depth, stripHalfWidthMm: half } = arm.channel;
    // The rim is round: at the sides of the strip the duct begins a sagitta further out than on its centreline.
    const sagitta =
      half < port.radiusMm ? port.radiusMm - Math.sqrt(port.radiusMm ** 2 - half ** 2) : port.radiusMm;
    const bound = WELL_K * Math.min(width, Number.isNaN(depth) ? width : depth) + sagitta;
    joints.sideBoundMm[arm.side] = bound;
    tally.add('entry from a well', 0, bound, port.xMm, port.yMm);
  }
}

function classify(
  draft: Draft,
  joints: NodeJoints,
  tally: JointTally,
  runs: RunLengths,
  node: number,
  arms: readonly Arm[],
): void {
  if (arms.some(({ channel }) => Number.isNaN(channel.depthMm))) return;
  const found =
    arms.length === 2
      ? twoArms(arms)
      : arms.length === 3
        ? threeArms(arms)
        : arms.length === 4
          ? fourArms(arms)
          : null;
  const at = { x: 0, y: 0 };
  const first = arms[0].side;
  pointAt(
    draft,
    runs.arcs.centreline[first >> 1],
    (first & 1) === 0 ? runs.arcs.from[first >> 1] : runs.arcs.to[first >> 1],
    at,
  );
  if (found?.parts.every((part) => runs.isLongEnough(part.arm.side, part.apartMm, part.wallMm))) {
    let added = 0;
    let bound = 0;
    for (const { arm, lengthMm, boundMm } of found.parts) {
      joints.sideMm[arm.side] += lengthMm;
      joints.sideBoundMm[arm.side] += boundMm;
      added += lengthMm;
      bound = Math.max(bound, boundMm);
    }
    joints.trimming[node] = found.trimming;
    tally.add(found.kind, added, bound, at.x, at.y);
    return;
  }
  const bound = unknownBound(arms);
  const overlap = overlapMm(arms);
  let largest = 0;
  for (const { side } of arms) {
    // No arm overlaps another on more than its own length.
    const own = bound + Math.min(overlap, runs.arcs.to[side >> 1] - runs.arcs.from[side >> 1]);
    joints.sideBoundMm[side] += own;
    largest = Math.max(largest, own);
  }
  tally.add(unknownKind(arms, found), 0, largest, at.x, at.y);
}

/** @param found the computed case that it would be, had its arms more room */
function unknownKind(arms: readonly Arm[], found: Computed | null): JointKind {
  if (arms.length > 2) {
    if (found !== null) return 'junction with short arms not computed';
    if (arms.length > 3 || !isSquareTee(arms)) return 'junction not computed';
    const isOfOneDepth = arms.every(({ channel }) => isEqualSize(channel.depthMm, arms[0].channel.depthMm));
    return isOfOneDepth ? 'T of unequal ducts not computed' : 'T with a step in depth not computed';
  }
  return 'step not computed';
}

/**
 * Where two arms leave at a sharp angle φ, the flow need not go down to the node: their strips (equal widths) are one up to
 * (w/2) cot(φ/2) from it, which is half a width at a right angle. How much more that is here, mm.
 */
function overlapMm(arms: readonly Arm[]): number {
  let sharpest = Math.PI / 2;
  for (const [i, arm] of arms.entries()) {
    for (const other of arms.slice(i + 1)) sharpest = Math.min(sharpest, angleBetween(arm, other));
  }
  const narrow = Math.min(...arms.map(({ channel }) => channel.ductWidthMm));
  return (narrow / 2) * (1 / Math.tan(sharpest / 2) - 1);
}

/** Centreline counting at angles that are not sharp: off by so much, and by the logarithm of spreading beyond ten widths. */
function unknownBound(arms: readonly Arm[]): number {
  const widths = arms.map(({ channel }) => channel.ductWidthMm);
  const narrow = Math.min(...widths);
  const ratio = Math.max(...widths) / narrow;
  return narrow * (UNKNOWN_K + (ratio > 10 ? (1.6 / Math.PI) * Math.log(ratio / 10) : 0));
}

interface Part {
  readonly arm: Arm;
  readonly lengthMm: number;
  readonly boundMm: number;
  /** Least distance to the next joint along this arm, mm. */
  readonly apartMm: number;
  /** Distance from the node to the wall that the arm's length runs to, mm. */
  readonly wallMm: number;
}

interface Computed {
  readonly kind: JointKind;
  readonly trimming: number;
  readonly parts: readonly Part[];
}

function toPart(arm: Arm, k: number, error: number, widthMm: number, wallMm = 0): Part {
  const own = arm.channel.ductWidthMm;
  return {
    arm,
    lengthMm: k * widthMm,
    boundMm: error * widthMm,
    // From a wall the meeting point of equal ducts would lie half a width further in.
    apartMm: APART_WIDTHS * own - (wallMm > 0 ? own / 2 : 0),
    wallMm,
  };
}

/** A collinear step in width. */
function twoArms(arms: readonly Arm[]): Computed | null {
  const [one, two] = arms;
  const turn = Math.PI - angleBetween(one, two);
  if (!isEqualSize(one.channel.depthMm, two.channel.depthMm) || turn > ANGLE_TOLERANCE_RAD) return null;
  const [narrow, wide] = one.channel.ductWidthMm <= two.channel.ductWidthMm ? [one, two] : [two, one];
  const width = narrow.channel.ductWidthMm;
  const { k, error } = stepK(width / narrow.channel.depthMm, wide.channel.ductWidthMm / width);
  return {
    kind: 'step in width',
    trimming: TRIM_NOTHING,
    parts: [toPart(narrow, k, error, width), toPart(wide, 0, 0, width)],
  };
}

/** A T: a main straight through and a side at right angles, no wider than the main. */
function threeArms(arms: readonly Arm[]): Computed | null {
  const [mainA, mainB, side] = asTee(arms);
  if (!arms.every(({ channel }) => isEqualSize(channel.depthMm, arms[0].channel.depthMm))) return null;
  if (!isEqualSize(mainA.channel.ductWidthMm, mainB.channel.ductWidthMm)) return null;
  if (!isSquareTee(arms)) return null;
  const width = side.channel.ductWidthMm;
  const mainWidth = mainA.channel.ductWidthMm;
  const aspect = width / side.channel.depthMm;
  if (isEqualSize(width, mainWidth)) {
    const { main, side: k, error } = teeEqualK(aspect);
    return {
      kind: 'T of equal ducts',
      trimming: TRIM_NOTHING,
      parts: [
        toPart(mainA, main, error, width),
        toPart(mainB, main, error, width),
        toPart(side, k, error, width),
      ],
    };
  }
  if (width > mainWidth) return null;
  const { mainHalf, side: k, error } = teeIntoWideK(aspect, mainWidth / width);
  return {
    kind: 'T into a wider main',
    trimming: TRIM_TO_WALL,
    parts: [
      toPart(mainA, mainHalf, error, width),
      toPart(mainB, mainHalf, error, width),
      toPart(side, k, error, width, mainA.channel.stripHalfWidthMm),
    ],
  };
}

/** A main straight through and a side at right angles, of whatever widths and depths. */
function isSquareTee(arms: readonly Arm[]): boolean {
  const [mainA, mainB, side] = asTee(arms);
  if (Math.PI - angleBetween(mainA, mainB) > ANGLE_TOLERANCE_RAD) return false;
  return [mainA, mainB].every(
    (main) => Math.abs(angleBetween(main, side) - Math.PI / 2) <= ANGLE_TOLERANCE_RAD,
  );
}

/** The two arms that are most nearly straight on first, the third last. */
function asTee(arms: readonly Arm[]): readonly [Arm, Arm, Arm] {
  const [a, b, c] = arms;
  const ab = angleBetween(a, b);
  const bc = angleBetween(b, c);
  const ca = angleBetween(c, a);
  if (ab >= bc && ab >= ca) return [a, b, c];
  return bc >= ca ? [b, c, a] : [c, a, b];
}

/** A right-angled cross of four equal ducts. */
function fourArms(arms: readonly Arm[]): Computed | null {
  if (!arms.every(({ channel }) => isEqualDuct(channel, arms[0].channel))) return null;
  const [first, ...rest] = arms;
  const sorted = [...rest].sort((p, q) => angleBetween(first, q) - angleBetween(first, p));
  const [opposite, left, right] = sorted;
  if (Math.PI - angleBetween(first, opposite) > ANGLE_TOLERANCE_RAD) return null;
  if (Math.PI - angleBetween(left, right) > ANGLE_TOLERANCE_RAD) return null;
  if (Math.abs(angleBetween(first, left) - Math.PI / 2) > ANGLE_TOLERANCE_RAD) return null;
  const width = first.channel.ductWidthMm;
  const { arm: k, bound, error } = crossK(width / first.channel.depthMm);
  return {
    kind: 'cross of equal ducts',
    trimming: TRIM_NOTHING,
    // A passage has two arms. With two opposite arms in and two out the star is off by three times what it is off by
    // straight on or round a corner (the cross has two constants, straight and turn; the star one).
    parts: arms.map((arm) => toPart(arm, k, 1.5 * bound + error, width)),
  };
}

function angleBetween(a: Arm, b: Arm): number {
  return Math.atan2(Math.abs(a.dx * b.dy - a.dy * b.dx), a.dx * b.dx + a.dy * b.dy);
}

/** How far each arm runs straight on before the next joint. */
class RunLengths {
  readonly arcs: Arcs;
  private readonly draft: Draft;
  private readonly sides: ReturnType<typeof sidesByNode>;

  constructor(draft: Draft, arcs: Arcs, sides: ReturnType<typeof sidesByNode>) {
    this.draft = draft;
    this.arcs = arcs;
    this.sides = sides;
  }

  /**
   * Whether the arm is free of other joints for `apartMm` beyond `wallMm` from the node: of nodes where channels meet,
   * rims and corners; and, where it ends dead, for three widths. Seams are walked through.
   */
  isLongEnough(side: number, apartMm: number, wallMm: number): boolean {
    const { draft, arcs, sides } = this;
    const { ductWidthMm: width } =
      draft.chip.channels[draft.pieces.centrelineChannel[arcs.centreline[side >> 1]]];
    const { slackMm } = draft;
    const need = wallMm + apartMm;
    const deadNeed = Math.max(need, wallMm + DEAD_END_WIDTHS * width);
    // A bend has no meeting point; it begins where a mitre's square would: half a width before.
    let turnLeft = ANGLE_TOLERANCE_RAD;
    let walked = 0;
    for (let at = side; ; ) {
      const arc = at >> 1;
      const forward = (at & 1) === 0;
      const corner = walked + this.distanceToCorner(arc, forward, deadNeed - walked);
      if (corner < need - slackMm) return false;
      turnLeft -= this.turnOfBends(arc, forward, need - width / 2 - slackMm - walked);
      if (turnLeft < 0) return false;
      walked += arcs.to[arc] - arcs.from[arc];
      if (walked >= deadNeed - slackMm) return true;
      const node = forward ? arcs.nodeTo[arc] : arcs.nodeFrom[arc];
      const degree = sides.first[node + 1] - sides.first[node];
      if (node >= draft.portCount && degree === 1) return false;
      const next = node < draft.portCount || degree !== 2 ? -1 : this.seamSide(node, at ^ 1);
      if (next < 0 || next === side) return walked >= need - slackMm;
      const isCorner = walked > slackMm && this.turnAtSeam(at ^ 1, next) > ANGLE_TOLERANCE_RAD;
      if (isCorner) return walked >= need - slackMm;
      at = next;
    }
  }

  /** The side in which the duct goes on at a node of two, −1 where it changes there. */
  private seamSide(node: number, side: number): number {
    const { draft, arcs, sides } = this;
    const [one, two] = [sides.side[sides.first[node]], sides.side[sides.first[node] + 1]];
    const other = one === side ? two : one;
    const channelOf = (s: number) =>
      draft.chip.channels[draft.pieces.centrelineChannel[arcs.centreline[s >> 1]]];
    return isEqualDuct(channelOf(side), channelOf(other)) ? other : -1;
  }

  /** By how much the duct turns where one side goes on in another, without what belongs to curves. */
  private turnAtSeam(side: number, next: number): number {
    const [ux, uy, radius] = firstStep(this.draft, this.arcs, side);
    const [vx, vy, nextRadius] = firstStep(this.draft, this.arcs, next);
    return turnBetween(-ux, -uy, radius, vx, vy, nextRadius);
  }

  /** By how much curves turn the arm within a distance of its node. */
  private turnOfBends(arc: number, forward: boolean, within: number): number {
    const { draft, arcs } = this;
    const { pieces } = draft;
    const c = arcs.centreline[arc];
    const start = forward ? arcs.from[arc] : Math.max(arcs.to[arc] - within, arcs.from[arc]);
    const end = forward ? Math.min(arcs.from[arc] + within, arcs.to[arc]) : arcs.to[arc];
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

  private distanceToCorner(arc: number, forward: boolean, limit: number): number {
    const { draft, arcs } = this;
    const { pieces } = draft;
    const c = arcs.centreline[arc];
    const start = forward ? arcs.from[arc] : arcs.to[arc];
    const end = forward ? arcs.to[arc] : arcs.from[arc];
    const length = pieces.centrelineLength[c];
    let piece = pieceAt(pieces, c, Math.min(Math.max(start, 0), length));
    if (!forward && pieces.start[piece] >= start && piece > pieces.firstPiece[c]) piece--;
    for (;;) {
      const vertex = forward ? pieces.start[piece] + pieces.length[piece] : pieces.start[piece];
      const walked = Math.abs(vertex - start);
      if (walked > limit || (forward ? vertex >= end : vertex <= end)) return Number.POSITIVE_INFINITY;
      const next = forward ? piece + 1 : piece - 1;
      if (next < pieces.firstPiece[c] || next >= pieces.firstPiece[c + 1]) return Number.POSITIVE_INFINITY;
      if (walked > draft.slackMm && cornerTurn(draft, Math.min(piece, next)) > ANGLE_TOLERANCE_RAD)
        return walked;
      piece = next;
    }
  }
}

/**
 * Turn at the vertex between a piece and the next, less what belongs to curves cut into chords: a chord of a curve leaves
 * its tangent by half the angle that it spans.
 */
export function cornerTurn(draft: Draft, piece: number): number {
  const { pieces: p } = draft;
  if (!endsAtVertex(p, piece)) return 0;
  const c = p.centreline[piece];
  const next = piece + 1 < p.firstPiece[c + 1] ? piece + 1 : p.firstPiece[c];
  return turnBetween(
    p.x2[piece] - p.x1[piece],
    p.y2[piece] - p.y1[piece],
    p.bendRadius[piece],
    p.x2[next] - p.x1[next],
    p.y2[next] - p.y1[next],
    p.bendRadius[next],
  );
}

/** Turn from one straight piece (its vector and bend radius, 0 for straight) to the next, without the part of their curves. */
export function turnBetween(
  ux: number,
  uy: number,
  radius1: number,
  vx: number,
  vy: number,
  radius2: number,
): number {
  const turn = Math.abs(Math.atan2(ux * vy - uy * vx, ux * vx + uy * vy));
  const curved = halfAngle(Math.hypot(ux, uy), radius1) + halfAngle(Math.hypot(vx, vy), radius2);
  if (curved === 0) return turn;
  // Where the radius changes along a curve, a chord's own radius is only near the mean: leave it some room.
  return Math.max(0, turn - 1.25 * curved - 1e-3);
}

function halfAngle(chord: number, radius: number): number {
  return radius === 0 ? 0 : Math.asin(Math.min(1, chord / (2 * radius)));
}
