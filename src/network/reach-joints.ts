import type { Chains } from './chains.ts';
import type { Draft } from './draft.ts';
import type { ReachJoints } from './duct-joints.ts';
import type { NodeJoints } from './node-joints.ts';
import type { Reaches } from './reaches.ts';

/**
 * What the joints at the nodes and inside the reaches add to each reach. With `joints: centreline` nothing is added, and
 * what would have been is what the joints could move it by.
 */
export function toReachJoints(
  draft: Draft,
  reaches: Reaches,
  runs: Chains,
  atNodes: NodeJoints,
  inDucts: ReachJoints,
): ReachJoints {
  const { reachJointMm: jointMm, reachJointBoundMm: boundMm } = inDucts;
  for (let a = 0; a < reaches.arcReach.length; a++) {
    const r = reaches.arcReach[a];
    jointMm[r] += atNodes.sideMm[2 * a] + atNodes.sideMm[2 * a + 1];
    boundMm[r] += atNodes.sideBoundMm[2 * a] + atNodes.sideBoundMm[2 * a + 1];
  }
  if (draft.chip.joints === 'resolved') {
    for (let n = 0; n < runs.count; n++) keepHalf(reaches, runs, n, jointMm, boundMm);
    return inDucts;
  }
  return {
    reachJointMm: new Float64Array(reaches.reachCount),
    reachJointBoundMm: boundMm.map(
      (bound, r) => bound + Math.abs(jointMm[r] + reaches.resolvedMm[r] - reaches.reachCentrelineMm[r]),
    ),
  };
}

/**
 * Joints apart as the rules ask leave every run most of its length; a reach of it that is shorter than what they take hands
 * the rest on to the others, for a duct without resistance has no flow. Should drawing and slack conspire against the whole
 * run, half of it is kept and the rest goes to the bound.
 */
function keepHalf(
  { resolvedMm }: Reaches,
  { first, side }: Chains,
  n: number,
  jointMm: Float64Array,
  boundMm: Float64Array,
): void {
  let lacking = 0;
  let spare = 0;
  for (let k = first[n]; k < first[n + 1]; k++) {
    const room = jointMm[side[k] >> 1] + 0.5 * resolvedMm[side[k] >> 1];
    if (room < 0) lacking -= room;
    else spare += room;
  }
  if (lacking === 0) return;
  const share = Math.min(1, lacking / spare);
  for (let k = first[n]; k < first[n + 1]; k++) {
    const r = side[k] >> 1;
    const room = jointMm[r] + 0.5 * resolvedMm[r];
    if (room >= 0) {
      jointMm[r] -= share * room;
      continue;
    }
    jointMm[r] = -0.5 * resolvedMm[r];
    if (lacking > spare) boundMm[r] += (-room * (lacking - spare)) / lacking;
  }
}
