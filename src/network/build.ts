import { minWallM } from '../chip/limits.ts';
import type { Chip } from '../chip/types.ts';
import { type Arcs, toArcs } from './arcs.ts';
import type { Bundles } from './bundles.ts';
import { type Draft, END_FREE, END_IN_PORT, Marks, NodeUnion, pointAt, toEnds } from './draft.ts';
import { addDuctJoints, type DuctJoints } from './duct-joints.ts';
import { joinEnds } from './ends.ts';
import { isEqualDuct } from './equal-ducts.ts';
import { JointTally } from './joint-types.ts';
import type { Kept } from './kept.ts';
import { markMeetings } from './meetings.ts';
import { numberOfKind } from './names.ts';
import { findNearPieces } from './near-pieces.ts';
import { classifyNodes, type NodeJoints } from './node-joints.ts';
import { leaveOutEndPieces } from './overshoot.ts';
import { type Reaches, toReaches } from './reaches.ts';
import { type Runs, toRuns } from './runs.ts';
import { type Stops, stopsByNode, toStops } from './stops.ts';
import { findTrims } from './trimming.ts';
import { type EndFate, type Network, NODE_KINDS, type NodeKind } from './types.ts';
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
    nodes: new NodeUnion(),
    marks: new Marks(),
    ends: toEnds(pieces),
    portCount: chip.ports.length,
  };
  chip.ports.forEach(() => {
    draft.nodes.add();
  });
  markMeetings(draft);
  markWells(draft);
  const bundles = joinEnds(draft);
  const stops = toStops(draft);
  const kept = leaveOutEndPieces(draft, stops, bundles);
  const arcs = toArcs(draft, stops, kept);
  const tally = new JointTally();
  const atNodes = classifyNodes(draft, arcs, tally);
  const { trims, strips } = findTrims(draft, stops, kept, atNodes.trimming);
  const reaches = toReaches(draft, arcs, trims);
  const runs = toRuns(draft, reaches);
  const joints = toReachJoints(draft, reaches, runs, atNodes, addDuctJoints(draft, reaches, runs, tally));
  return toNetwork(draft, bundles, stops, kept, arcs, reaches, strips, joints, tally);
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
  draft: Draft,
  bundles: Bundles,
  stops: Stops,
  kept: Kept,
  arcs: Arcs,
  reaches: Reaches,
  strips: Network['trace']['strips'],
  joints: ReachJoints,
  tally: JointTally,
): Network {
  const { chip, pieces } = draft;
  const index = numberNodes(draft, reaches);
  const degree = new Int32Array(index.count);
  const reachFrom = reaches.from.map((root) => index.ofRoot[root]);
  const reachTo = reaches.to.map((root) => index.ofRoot[root]);
  for (let r = 0; r < reaches.count; r++) {
    degree[reachFrom[r]]++;
    degree[reachTo[r]]++;
  }
  const nodeKind = new Uint8Array(index.count);
  const firstDuct = new Int32Array(index.count).fill(-1);
  const changes = new Uint8Array(index.count);
  const meet = (node: number, channel: number): void => {
    if (firstDuct[node] < 0) firstDuct[node] = channel;
    else if (
      firstDuct[node] !== channel &&
      !isEqualDuct(chip.channels[firstDuct[node]], chip.channels[channel])
    )
      changes[node] = 1;
  };
  for (let r = 0; r < reaches.count; r++) {
    meet(reachFrom[r], reaches.channel[r]);
    meet(reachTo[r], reaches.channel[r]);
  }
  const nodePort = new Int32Array(index.count).fill(-1);
  const portNode = new Int32Array(chip.ports.length);
  for (let p = chip.ports.length - 1; p >= 0; p--) {
    portNode[p] = index.ofRoot[draft.nodes.find(p)];
    nodePort[portNode[p]] = p;
  }
  for (let node = 0; node < index.count; node++) {
    nodeKind[node] = NODE_KINDS.indexOf(kindOf(nodePort[node], degree[node], changes[node] === 1));
  }

  const reachNumber = new Int32Array(reaches.count);
  const channelReachCount = new Int32Array(chip.channels.length);
  for (let r = 0; r < reaches.count; r++) reachNumber[r] = ++channelReachCount[reaches.channel[r]];

  const { nodeX, nodeY } = placeNodes(draft, arcs, index, nodePort);
  const ductMm = chip.joints === 'resolved' ? reaches.resolvedMm : reaches.byRuleMm;
  const segments = reaches.segments;
  return {
    chip,
    nodeCount: index.count,
    nodeKind,
    nodeX,
    nodeY,
    nodePort,
    nodeNumber: numberOfKind(nodeKind),
    portNode,
    reachCount: reaches.count,
    reachChannel: reaches.channel,
    reachNumber,
    channelReachCount,
    reachFrom,
    reachTo,
    reachDrawnMm: reaches.drawnMm,
    reachDuctMm: ductMm.map((length, r) => length + joints.jointMm[r]),
    reachJointMm: joints.jointMm,
    reachJointBoundMm: joints.boundMm,
    reachCentrelineMm: reaches.byRuleMm,
    joints: tally.summaries(),
    firstSegment: reaches.firstSegment,
    segmentCount: segments.count,
    segmentReach: new Int32Array(segments.reach),
    segmentX1: new Float64Array(segments.x1),
    segmentY1: new Float64Array(segments.y1),
    segmentX2: new Float64Array(segments.x2),
    segmentY2: new Float64Array(segments.y2),
    segmentDuctMm: new Float64Array(segments.ductMm),
    segmentBendRadiusMm: new Float64Array(segments.bendRadius),
    trace: toTrace(),
  };

  function toTrace(): Network['trace'] {
    const n = pieces.centrelineCount;
    const firstArc = new Int32Array(n + 1);
    for (const c of arcs.centreline) firstArc[c + 1]++;
    for (let c = 0; c < n; c++) firstArc[c + 1] += firstArc[c];
    const arcNodeFrom = new Int32Array(arcs.count);
    const arcNodeTo = new Int32Array(arcs.count);
    for (let a = 0; a < arcs.count; a++) {
      arcNodeFrom[a] = index.ofRoot[arcs.nodeFrom[a]];
      arcNodeTo[a] = index.ofRoot[arcs.nodeTo[a]];
    }
    const endNode = new Int32Array(2 * n).fill(-1);
    const endFate: EndFate[] = new Array(2 * n);
    for (let c = 0; c < n; c++) {
      const hasArcs = firstArc[c + 1] > firstArc[c];
      for (const end of [2 * c, 2 * c + 1]) {
        endFate[end] = fateOf(draft, kept, end);
        if (endFate[end] === 'left out' || !hasArcs || pieces.centrelineClosed[c] === 1) continue;
        endNode[end] = end === 2 * c ? arcNodeFrom[firstArc[c]] : arcNodeTo[firstArc[c + 1] - 1];
        // Another channel's end may have been carried on to this one.
        const meetsOthers = endNode[end] >= 0 && NODE_KINDS[nodeKind[endNode[end]]] !== 'end';
        if (endFate[end] === 'open' && meetsOthers) endFate[end] = 'joined';
      }
    }
    const byNode = stopsByNode(draft, stops, kept.from, kept.to);
    return {
      near: draft.near,
      arcCount: arcs.count,
      arcCentreline: new Int32Array(arcs.centreline),
      arcFrom: new Float64Array(arcs.from),
      arcTo: new Float64Array(arcs.to),
      arcReach: reaches.arcReach,
      arcReversed: reaches.arcReversed,
      arcNodeFrom,
      arcNodeTo,
      firstArc,
      endFate,
      endNode,
      endExtensionMm: draft.ends.extension,
      endLeftOutMm: kept.leftOutMm,
      endJoinedTo: draft.ends.joinedTo,
      endBundle: bundles.of,
      strips,
      ...toPlaces(stops, byNode, index),
    };
  }
}

interface ReachJoints {
  readonly jointMm: Float64Array;
  readonly boundMm: Float64Array;
}

/**
 * What the joints at the nodes and inside the reaches add to each reach. With `joints: centreline` nothing is added, and
 * what would have been is what the joints could move it by.
 */
function toReachJoints(
  draft: Draft,
  reaches: Reaches,
  runs: Runs,
  atNodes: NodeJoints,
  inDucts: DuctJoints,
): ReachJoints {
  const jointMm = inDucts.reachMm;
  const boundMm = inDucts.reachBoundMm;
  for (let a = 0; a < reaches.arcReach.length; a++) {
    const r = reaches.arcReach[a];
    jointMm[r] += atNodes.sideMm[2 * a] + atNodes.sideMm[2 * a + 1];
    boundMm[r] += atNodes.sideBoundMm[2 * a] + atNodes.sideBoundMm[2 * a + 1];
  }
  if (draft.chip.joints === 'resolved') {
    for (let n = 0; n < runs.count; n++) keepHalf(reaches, runs, n, jointMm, boundMm);
    return { jointMm, boundMm };
  }
  return {
    jointMm: new Float64Array(reaches.count),
    boundMm: boundMm.map(
      (bound, r) => bound + Math.abs(jointMm[r] + reaches.resolvedMm[r] - reaches.byRuleMm[r]),
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
  { first, reach }: Runs,
  n: number,
  jointMm: Float64Array,
  boundMm: Float64Array,
): void {
  let lacking = 0;
  let spare = 0;
  for (let k = first[n]; k < first[n + 1]; k++) {
    const room = jointMm[reach[k]] + 0.5 * resolvedMm[reach[k]];
    if (room < 0) lacking -= room;
    else spare += room;
  }
  if (lacking === 0) return;
  const share = Math.min(1, lacking / spare);
  for (let k = first[n]; k < first[n + 1]; k++) {
    const r = reach[k];
    const room = jointMm[r] + 0.5 * resolvedMm[r];
    if (room >= 0) {
      jointMm[r] -= share * room;
      continue;
    }
    jointMm[r] = -0.5 * resolvedMm[r];
    if (lacking > spare) boundMm[r] += (-room * (lacking - spare)) / lacking;
  }
}

interface NodeNumbers {
  readonly count: number;
  /** Node of each root of the draft; −1 where no reach and no port is. */
  readonly ofRoot: Int32Array;
  readonly rootOf: number[];
}

/** Ports first in their order, then nodes in the order in which reaches come to them. */
function numberNodes(draft: Draft, reaches: Reaches): NodeNumbers {
  const ofRoot = new Int32Array(draft.nodes.size).fill(-1);
  const rootOf: number[] = [];
  const number = (root: number): void => {
    if (ofRoot[root] >= 0) return;
    ofRoot[root] = rootOf.length;
    rootOf.push(root);
  };
  for (let p = 0; p < draft.portCount; p++) number(draft.nodes.find(p));
  for (let r = 0; r < reaches.count; r++) {
    number(reaches.from[r]);
    number(reaches.to[r]);
  }
  return { count: rootOf.length, ofRoot, rootOf };
}

function kindOf(port: number, degree: number, changes: boolean): NodeKind {
  if (port >= 0) return 'port';
  if (degree === 1) return 'end';
  return degree === 2 && changes ? 'step' : 'junction';
}

/** A port's node is at its centre, any other where the first arc that comes to it ends. */
function placeNodes(draft: Draft, arcs: Arcs, index: NodeNumbers, nodePort: Int32Array) {
  const nodeX = new Float64Array(index.count).fill(Number.NaN);
  const nodeY = new Float64Array(index.count).fill(Number.NaN);
  for (let node = 0; node < index.count; node++) {
    if (nodePort[node] < 0) continue;
    nodeX[node] = draft.chip.ports[nodePort[node]].xMm;
    nodeY[node] = draft.chip.ports[nodePort[node]].yMm;
  }
  const at = { x: 0, y: 0 };
  const place = (root: number, c: number, s: number): void => {
    const node = index.ofRoot[root];
    if (node < 0 || !Number.isNaN(nodeX[node])) return;
    pointAt(draft, c, s, at);
    nodeX[node] = at.x;
    nodeY[node] = at.y;
  };
  for (let a = 0; a < arcs.count; a++) {
    place(arcs.nodeFrom[a], arcs.centreline[a], arcs.from[a]);
    place(arcs.nodeTo[a], arcs.centreline[a], arcs.to[a]);
  }
  return { nodeX, nodeY };
}

function fateOf(draft: Draft, kept: Kept, end: number): EndFate {
  if (kept.leftOutBy[end] !== null) return 'left out';
  if (draft.pieces.centrelineClosed[end >> 1] === 1) return 'joined';
  const state = draft.ends.state[end];
  return state === END_FREE ? 'open' : state === END_IN_PORT ? 'port' : 'joined';
}

function toPlaces(stops: Stops, byNode: { first: Int32Array; stop: Int32Array }, index: NodeNumbers) {
  const firstPlace = new Int32Array(index.count + 1);
  const placeCentreline = new Int32Array(stops.count);
  const placeFrom = new Float64Array(stops.count);
  const placeTo = new Float64Array(stops.count);
  let count = 0;
  for (let node = 0; node < index.count; node++) {
    const root = index.rootOf[node];
    if (root + 1 < byNode.first.length) {
      for (let k = byNode.first[root]; k < byNode.first[root + 1]; k++, count++) {
        placeCentreline[count] = stops.centreline[byNode.stop[k]];
        placeFrom[count] = stops.from[byNode.stop[k]];
        placeTo[count] = stops.to[byNode.stop[k]];
      }
    }
    firstPlace[node + 1] = count;
  }
  return {
    firstPlace,
    placeCentreline: placeCentreline.subarray(0, count),
    placeFrom: placeFrom.subarray(0, count),
    placeTo: placeTo.subarray(0, count),
  };
}
