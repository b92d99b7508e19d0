import { itemsOf, sidesByNode } from '../groups.ts';
import type { Arcs } from './arcs.ts';
import { type Arms, isLongEnough } from './arm-lengths.ts';
import { type Arm, angleBetween, channelOf, toArm } from './arms.ts';
import { passages } from './chains.ts';
import { type Computed, computedJoint, isOfOneDepth, isSquareTee } from './computed-joints.ts';
import { type Draft, pointAt } from './draft.ts';
import { isEqualDuct } from './equal-ducts.ts';
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

/**
 * Estimated bound of an end correction that was not computed, in widths of the narrowest duct, while no two arms are nearer
 * than a right angle: no computed one is off centreline counting by more up to W = 10w (a step to 10w: 0.614).
 */
const UNKNOWN_K = 0.62;
/** Entry of creeping flow from a wide, deep well: half of Sampson's orifice is 0.59 radii of a tube, 0.41 widths of a deep slot. */
const WELL_K = 0.6;

export function classifyNodes(draft: Draft, arcs: Arcs, tally: JointTally): NodeJoints {
  const sides = sidesByNode(draft.nodes.size, arcs.rootFrom, arcs.rootTo);
  const seams = passages(sides, draft.portCount, (a, b) =>
    isEqualDuct(channelOf(draft, arcs, a), channelOf(draft, arcs, b)),
  );
  const joints: NodeJoints = {
    sideMm: new Float64Array(2 * arcs.arcCount),
    sideBoundMm: new Float64Array(2 * arcs.arcCount),
    trimming: new Uint8Array(draft.nodes.size),
  };
  const around: Surroundings = { draft, arcs, sides, seams, joints, tally };
  for (let node = 0; node + 1 < sides.first.length; node++) {
    const here = itemsOf(sides, node);
    const isWell = node < draft.portCount;
    // An inner point of a reach or a seam (rule 3) is no joint: duct-joints.ts looks there for a corner.
    if (here.length === 0 || (!isWell && (here.length === 1 || seams[here[0]] >= 0))) continue;
    const arms: Arm[] = [];
    for (const side of here) arms.push(toArm(draft, arcs, side));
    if (isWell) markWell(around, node, arms);
    else classify(around, node, arms);
  }
  return joints;
}

/** What a node is classified by, and where it is written down. */
interface Surroundings extends Arms {
  readonly joints: NodeJoints;
  readonly tally: JointTally;
}

function markWell({ draft, joints, tally }: Surroundings, node: number, arms: readonly Arm[]): void {
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

function classify(around: Surroundings, node: number, arms: readonly Arm[]): void {
  const { draft, arcs, joints, tally } = around;
  if (arms.some(({ channel }) => Number.isNaN(channel.depthMm))) return;
  const { side } = arms[0];
  const { x, y } = pointAt(
    draft,
    arcs.arcCentreline[side >> 1],
    ((side & 1) === 0 ? arcs.arcFrom : arcs.arcTo)[side >> 1],
  );
  const found = computedJoint(arms);
  if (found?.parts.every((part) => isLongEnough(around, part.arm.side, part.apartMm, part.wallMm))) {
    let added = 0;
    let bound = 0;
    for (const { arm, lengthMm, boundMm } of found.parts) {
      joints.sideMm[arm.side] += lengthMm;
      joints.sideBoundMm[arm.side] += boundMm;
      added += lengthMm;
      bound = Math.max(bound, boundMm);
    }
    joints.trimming[node] = found.trimming;
    tally.add(found.kind, added, bound, x, y);
    return;
  }
  const bound = unknownBound(arms);
  const overlap = overlapMm(arms);
  let largest = 0;
  for (const { side } of arms) {
    // No arm overlaps another on more than its own length.
    const own = bound + Math.min(overlap, arcs.arcTo[side >> 1] - arcs.arcFrom[side >> 1]);
    joints.sideBoundMm[side] += own;
    largest = Math.max(largest, own);
  }
  tally.add(unknownKind(arms, found), 0, largest, x, y);
}

/** @param found the computed case that it would be, had its arms more room */
function unknownKind(arms: readonly Arm[], found: Computed | null): JointKind {
  if (arms.length > 2) {
    if (found !== null) return 'junction with short arms not computed';
    if (arms.length > 3 || !isSquareTee(arms)) return 'junction not computed';
    return isOfOneDepth(arms) ? 'T of unequal ducts not computed' : 'T with a step in depth not computed';
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
