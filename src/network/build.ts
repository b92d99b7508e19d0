import { minWallM } from '../chip/limits.ts';
import type { Chip } from '../chip/types.ts';
import { toArcs } from './arcs.ts';
import { type Draft, Marks, NodeUnion, toEnds } from './draft.ts';
import { addDuctJoints, type ReachJoints } from './duct-joints.ts';
import { joinEnds } from './ends.ts';
import { JointTally } from './joint-types.ts';
import { stopsByNode } from './kept.ts';
import { markMeetings } from './meetings.ts';
import { findNearPieces } from './near-pieces.ts';
import { classifyNodes } from './node-joints.ts';
import { type Nodes, toNodes } from './nodes.ts';
import { leaveOutEndPieces } from './overshoot.ts';
import { toReachJoints } from './reach-joints.ts';
import { type Reaches, toReaches } from './reaches.ts';
import { toRuns } from './runs.ts';
import { toStops } from './stops.ts';
import { toTrace } from './trace.ts';
import { findTrims } from './trimming.ts';
import type { Network, NetworkTrace } from './types.ts';
import { uniteEqualStrips } from './united-strips.ts';
import { markWells } from './wells.ts';

/**
 * Joins the channels and ports of a chip into a network of nodes, reaches and segments by the joining rules.
 *
 * Errors: InputError when a limit on segments or near pairs is passed. Cost: n log n in the number of drawn pieces, plus
 * the pairs of pieces that really come near each other.
 */
export function buildNetwork(chip: Chip): Network {
  const near = findNearPieces(chip, nearnessMm(chip));
  const { pieces } = near;
  const draft: Draft = {
    chip,
    near,
    pieces,
    slackMm: chip.joinWithinMm,
    nodes: new NodeUnion(chip.ports.length),
    marks: new Marks(),
    ends: toEnds(pieces),
    portCount: chip.ports.length,
  };
  markMeetings(draft);
  markWells(draft);
  const bundles = joinEnds(draft);
  const stops = toStops(draft);
  const kept = leaveOutEndPieces(draft, stops, bundles);
  const arcs = toArcs(draft, stops, kept);
  const byNode = stopsByNode(draft, stops, kept);
  const tally = new JointTally();
  const atNodes = classifyNodes(draft, arcs, tally);
  const strips = uniteEqualStrips(draft, stops, kept, byNode);
  const trims = findTrims(draft, stops, kept, byNode, strips, atNodes.trimming);
  const reaches = toReaches(draft, arcs, trims);
  const runs = toRuns(draft, reaches);
  const joints = toReachJoints(draft, reaches, runs, atNodes, addDuctJoints(draft, reaches, runs, tally));
  const nodes = toNodes(draft, arcs, reaches);
  const trace = toTrace({ draft, bundles, stops, kept, arcs, byNode, strips: strips.ends, reaches, nodes });
  return toNetwork(chip, nodes, reaches, joints, tally, trace);
}

/** Strips nearer than this are of interest to some rule: the join slack, the least wall, or half the depth (slender walls). */
function nearnessMm(chip: Chip): number {
  let wall = 0;
  const add = (depthM: number): void => {
    const known = Number.isNaN(depthM) ? 0 : depthM;
    wall = Math.max(wall, (minWallM(chip, known)?.value ?? 0) * 1e3);
    if (chip.process === 'cast elastomer') wall = Math.max(wall, known * 500);
  };
  for (const layer of chip.layers) add(layer.depthM);
  // `data-depth` may make a channel deeper than its layer.
  const own = new Set<number>();
  for (const { depthMm } of chip.channels) own.add(depthMm);
  for (const depthMm of own) add(depthMm / 1e3);
  return Math.max(chip.joinWithinMm, wall);
}

function toNetwork(
  chip: Chip,
  nodes: Nodes,
  reaches: Reaches,
  joints: ReachJoints,
  tally: JointTally,
  trace: NetworkTrace,
): Network {
  const { ofRoot, rootOf, ...nodeColumns } = nodes;
  const { rootFrom, rootTo, resolvedMm, arcReach, arcReversed, ...reachColumns } = reaches;
  const { reachCount, reachChannel, reachCentrelineMm } = reaches;
  const reachNumber = new Int32Array(reachCount);
  const channelReachCount = new Int32Array(chip.channels.length);
  for (let r = 0; r < reachCount; r++) reachNumber[r] = ++channelReachCount[reachChannel[r]];
  const ductMm = chip.joints === 'resolved' ? resolvedMm : reachCentrelineMm;
  return {
    chip,
    ...nodeColumns,
    ...reachColumns,
    reachNumber,
    channelReachCount,
    reachDuctMm: ductMm.map((length, r) => length + joints.reachJointMm[r]),
    ...joints,
    joints: tally.summaries(),
    trace,
  };
}
