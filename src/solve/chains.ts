/**
 * Series chains: live edges that follow one another through nodes where nothing else can enter or leave have one flow, and count as one edge.
 * What is left are the core nodes (terminals and branchings) and the chains between them. Cost O(nodes + edges).
 */
import type { FlowGraph } from './flow-graph.ts';
import type { LiveGraph } from './live.ts';

export interface Chains {
  /** Core nodes: those of unknown pressure first, then the fixed ones. */
  readonly coreNode: Int32Array;
  readonly unknownCount: number;
  /** Place of a node among the core nodes, −1 for others. */
  readonly coreOf: Int32Array;
  /** Core nodes at the ends of each chain. */
  readonly chainFrom: Int32Array;
  readonly chainTo: Int32Array;
  /** Edges of chain c in order from chainFrom: link[chainStart[c]] … link[chainStart[c + 1] − 1]; forward = 1 where the edge points along the chain. */
  readonly chainStart: Int32Array;
  readonly link: Int32Array;
  readonly forward: Uint8Array;
  readonly chainOfEdge: Int32Array;
}

/** Gathers live edges into chains. Terminals are always core nodes. */
export function gatherChains(
  graph: FlowGraph,
  liveGraph: LiveGraph,
  fixedNodes: Int32Array,
  injectedNodes: Int32Array,
): Chains {
  const { nodeCount, from, to } = graph;
  const { start, edgeAt, live, root } = liveGraph;
  const { coreNode, coreOf, unknownCount } = coreOfGraph(graph, liveGraph, fixedNodes, injectedNodes);
  const chainFrom: number[] = [];
  const chainTo: number[] = [];
  const chainStart: number[] = [0];
  const link: number[] = [];
  const forward: number[] = [];
  const chainOfEdge = new Int32Array(from.length).fill(-1);
  for (let i = 0; i < nodeCount; i++) {
    if (coreOf[i] < 0 || root[i] < 0) continue;
    for (let p = start[i]; p < start[i + 1]; p++) {
      let e = edgeAt[p];
      if (live[e] === 0 || chainOfEdge[e] >= 0) continue;
      let node = i;
      for (;;) {
        chainOfEdge[e] = chainFrom.length;
        link.push(e);
        forward.push(from[e] === node ? 1 : 0);
        node = from[e] === node ? to[e] : from[e];
        if (coreOf[node] >= 0) break;
        e = otherLiveEdge(node, e, liveGraph);
      }
      chainFrom.push(coreOf[i]);
      chainTo.push(coreOf[node]);
      chainStart.push(link.length);
    }
  }
  return {
    coreNode,
    unknownCount,
    coreOf,
    chainFrom: Int32Array.from(chainFrom),
    chainTo: Int32Array.from(chainTo),
    chainStart: Int32Array.from(chainStart),
    link: Int32Array.from(link),
    forward: Uint8Array.from(forward),
    chainOfEdge,
  };
}

function coreOfGraph(
  { nodeCount, from, to }: FlowGraph,
  { live, root }: LiveGraph,
  fixedNodes: Int32Array,
  injectedNodes: Int32Array,
) {
  const FIXED = 2;
  const INJECTED = 1;
  const kind = new Uint8Array(nodeCount);
  for (const i of injectedNodes) kind[i] = INJECTED;
  for (const i of fixedNodes) kind[i] = FIXED;
  const liveDegree = new Int32Array(nodeCount);
  for (let e = 0; e < from.length; e++) {
    if (live[e] === 0) continue;
    liveDegree[from[e]]++;
    liveDegree[to[e]]++;
  }
  const unknown: number[] = [];
  const fixed: number[] = [];
  for (let i = 0; i < nodeCount; i++) {
    if (root[i] < 0) continue;
    if (kind[i] === FIXED) fixed.push(i);
    else if (kind[i] === INJECTED || liveDegree[i] > 2) unknown.push(i);
  }
  const coreNode = Int32Array.from([...unknown, ...fixed]);
  const coreOf = new Int32Array(nodeCount).fill(-1);
  coreNode.forEach((node, k) => {
    coreOf[node] = k;
  });
  return { coreNode, coreOf, unknownCount: unknown.length };
}

function otherLiveEdge(node: number, than: number, { start, edgeAt, live }: LiveGraph): number {
  let p = start[node];
  while (live[edgeAt[p]] === 0 || edgeAt[p] === than) p++;
  return edgeAt[p];
}
