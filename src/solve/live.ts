/**
 * Which edges of a flow graph can carry anything at all.
 * Join all terminals (nodes of given pressure or given flow) to one imagined node: an edge lies on a path between two terminals exactly when it is in one
 * biconnected block with that node. Everything else hangs on one node only, be it a stub, a tree or a loop, and carries nothing.
 * Source: R. Tarjan, SIAM J. Comput. 1 (1972) 146 (blocks by depth-first search). Cost O(nodes + edges), no recursion.
 */
import { toGroups } from '../groups.ts';
import type { FlowGraph } from './flow-graph.ts';

export interface LiveGraph {
  /** Edges at each node, each edge from a node to itself left out: edgeAt[start[i]] … edgeAt[start[i + 1] − 1]. */
  readonly start: Int32Array;
  readonly edgeAt: Int32Array;
  /** 1 where the edge can carry flow. */
  readonly live: Uint8Array;
  /** Node whose pressure a node shares for lack of flow between them: itself if it is live, −1 where no fixed pressure reaches. */
  readonly anchor: Int32Array;
  /** For each node the first fixed node of its part, −1 where none is. */
  readonly root: Int32Array;
}

/**
 * Finds the live edges.
 * @param fixedNodes nodes of given pressure
 * @param injectedNodes nodes into which a flow may be given
 */
export function findLiveEdges(
  graph: FlowGraph,
  fixedNodes: Int32Array,
  injectedNodes: Int32Array,
): LiveGraph {
  const { nodeCount, from, to } = graph;
  const { start, edgeAt } = edgesAtNodes(graph);
  const terminal = new Uint8Array(nodeCount);
  for (const i of fixedNodes) terminal[i] = 1;
  for (const i of injectedNodes) terminal[i] = 1;

  const { preorder, found, parentEdge, root } = depthFirst(graph, start, edgeAt, fixedNodes);

  // low = earliest node reached from the subtree by one edge out of it; the imagined node counts as −1.
  const low = new Int32Array(nodeCount);
  for (let k = preorder.length - 1; k >= 0; k--) {
    const u = preorder[k];
    low[u] = terminal[u] === 1 ? -1 : k;
    for (let p = start[u]; p < start[u + 1]; p++) {
      const e = edgeAt[p];
      if (e === parentEdge[u]) continue;
      const w = from[e] === u ? to[e] : from[e];
      const reached = parentEdge[w] === e ? low[w] : found[w];
      if (reached < low[u]) low[u] = reached;
    }
  }

  const nodeLive = new Uint8Array(nodeCount);
  const anchor = new Int32Array(nodeCount).fill(-1);
  for (const v of preorder) {
    const e = parentEdge[v];
    const u = e < 0 ? -1 : from[e] === v ? to[e] : from[e];
    nodeLive[v] = u < 0 || (nodeLive[u] === 1 && low[v] < found[u]) ? 1 : 0;
    anchor[v] = nodeLive[v] === 1 ? v : anchor[u];
  }
  const live = new Uint8Array(from.length);
  for (let e = 0; e < from.length; e++) {
    if (from[e] === to[e] || found[from[e]] < 0) continue;
    live[e] = nodeLive[found[from[e]] > found[to[e]] ? from[e] : to[e]];
  }
  return { start, edgeAt, live, anchor, root };
}

function edgesAtNodes({ nodeCount, from, to }: FlowGraph) {
  const nodeOf = new Int32Array(2 * from.length).fill(-1);
  for (let e = 0; e < from.length; e++) {
    if (from[e] === to[e]) continue;
    nodeOf[2 * e] = from[e];
    nodeOf[2 * e + 1] = to[e];
  }
  const { first, item } = toGroups(nodeCount, nodeOf);
  return { start: first, edgeAt: item.map((side) => side >> 1) };
}

function depthFirst(
  { nodeCount, from, to }: FlowGraph,
  start: Int32Array,
  edgeAt: Int32Array,
  fixedNodes: Int32Array,
) {
  const found = new Int32Array(nodeCount).fill(-1);
  const parentEdge = new Int32Array(nodeCount).fill(-1);
  const root = new Int32Array(nodeCount).fill(-1);
  const cursor = start.slice(0, nodeCount);
  const preorder: number[] = [];
  const stack: number[] = [];
  const enter = (node: number, by: number, top: number) => {
    found[node] = preorder.length;
    parentEdge[node] = by;
    root[node] = top;
    preorder.push(node);
    stack.push(node);
  };
  for (const top of fixedNodes) {
    if (found[top] >= 0) continue;
    enter(top, -1, top);
    while (stack.length > 0) {
      const u = stack[stack.length - 1];
      if (cursor[u] === start[u + 1]) {
        stack.pop();
        continue;
      }
      const e = edgeAt[cursor[u]++];
      const w = from[e] === u ? to[e] : from[e];
      if (found[w] < 0) enter(w, e, top);
    }
  }
  return { preorder, found, parentEdge, root };
}
