import type { Arcs } from './arcs.ts';
import { type Draft, pointAt } from './draft.ts';
import { isEqualDuct } from './equal-ducts.ts';
import { numberOfKind } from './names.ts';
import type { Reaches } from './reaches.ts';
import { type Network, NODE_KINDS, type NodeKind } from './types.ts';

/** The nodes as columns, and those at which reaches begin and end. */
export interface Nodes
  extends Pick<
    Network,
    | 'nodeCount'
    | 'nodeKind'
    | 'nodeX'
    | 'nodeY'
    | 'nodePort'
    | 'nodeNumber'
    | 'portNode'
    | 'reachFrom'
    | 'reachTo'
  > {
  /** Node of each root of the draft; −1 where no reach and no port is. */
  readonly ofRoot: Int32Array;
  readonly rootOf: readonly number[];
}

/** Ports first in their order, then nodes in the order in which reaches come to them. */
export function toNodes(draft: Draft, arcs: Arcs, reaches: Reaches): Nodes {
  const { ports } = draft.chip;
  const ofRoot = new Int32Array(draft.nodes.size).fill(-1);
  const rootOf: number[] = [];
  const number = (root: number): number => {
    if (ofRoot[root] < 0) ofRoot[root] = rootOf.push(root) - 1;
    return ofRoot[root];
  };
  const portNode = new Int32Array(ports.length);
  for (let p = 0; p < ports.length; p++) portNode[p] = number(draft.nodes.find(p));
  const reachFrom = new Int32Array(reaches.reachCount);
  const reachTo = new Int32Array(reaches.reachCount);
  for (let r = 0; r < reaches.reachCount; r++) {
    reachFrom[r] = number(reaches.rootFrom[r]);
    reachTo[r] = number(reaches.rootTo[r]);
  }
  const nodeCount = rootOf.length;
  const nodePort = new Int32Array(nodeCount).fill(-1);
  // Of ports whose wells are one the first names the node.
  for (let p = ports.length - 1; p >= 0; p--) nodePort[portNode[p]] = p;
  const nodeKind = kindsOf(draft, reaches, reachFrom, reachTo, nodePort);
  return {
    nodeCount,
    nodePort,
    portNode,
    reachFrom,
    reachTo,
    nodeKind,
    nodeNumber: numberOfKind(nodeKind),
    ofRoot,
    rootOf,
    ...placeNodes(draft, arcs, ofRoot, nodePort),
  };
}

/** The kind of each node as an index into NODE_KINDS. */
function kindsOf(
  { chip }: Draft,
  { reachCount, reachChannel }: Reaches,
  reachFrom: Int32Array,
  reachTo: Int32Array,
  nodePort: Int32Array,
): Uint8Array {
  const degree = new Int32Array(nodePort.length);
  const firstDuct = new Int32Array(nodePort.length);
  const changes = new Uint8Array(nodePort.length);
  const meet = (node: number, channel: number): void => {
    if (degree[node]++ === 0) firstDuct[node] = channel;
    else if (
      firstDuct[node] !== channel &&
      !isEqualDuct(chip.channels[firstDuct[node]], chip.channels[channel])
    )
      changes[node] = 1;
  };
  for (let r = 0; r < reachCount; r++) {
    meet(reachFrom[r], reachChannel[r]);
    meet(reachTo[r], reachChannel[r]);
  }
  const nodeKind = new Uint8Array(nodePort.length);
  for (let node = 0; node < nodePort.length; node++) {
    nodeKind[node] = NODE_KINDS.indexOf(kindOf(nodePort[node], degree[node], changes[node] === 1));
  }
  return nodeKind;
}

function kindOf(port: number, degree: number, changes: boolean): NodeKind {
  if (port >= 0) return 'port';
  if (degree === 1) return 'end';
  return degree === 2 && changes ? 'step' : 'junction';
}

/** A port's node is at its centre, any other where the first arc that comes to it ends. */
function placeNodes(draft: Draft, arcs: Arcs, ofRoot: Int32Array, nodePort: Int32Array) {
  const nodeX = new Float64Array(nodePort.length).fill(Number.NaN);
  const nodeY = new Float64Array(nodePort.length).fill(Number.NaN);
  for (let node = 0; node < nodePort.length; node++) {
    if (nodePort[node] < 0) continue;
    nodeX[node] = draft.chip.ports[nodePort[node]].xMm;
    nodeY[node] = draft.chip.ports[nodePort[node]].yMm;
  }
  const at = { x: 0, y: 0 };
  const place = (root: number, c: number, s: number): void => {
    const node = ofRoot[root];
    if (node < 0 || !Number.isNaN(nodeX[node])) return;
    pointAt(draft, c, s, at);
    nodeX[node] = at.x;
    nodeY[node] = at.y;
  };
  for (let a = 0; a < arcs.arcCount; a++) {
    place(arcs.rootFrom[a], arcs.arcCentreline[a], arcs.arcFrom[a]);
    place(arcs.rootTo[a], arcs.arcCentreline[a], arcs.arcTo[a]);
  }
  return { nodeX, nodeY };
}
