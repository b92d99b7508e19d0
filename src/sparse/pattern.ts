/**
 * The pattern of a graph Laplacian: an undirected graph given by its edges.
 * The values come later, one weight per edge: w at row a, column b counts −w there and +w on both diagonals.
 */
export interface GraphPattern {
  readonly nodeCount: number;
  /** Ends of each edge. Parallel edges add up; an edge from a node to itself counts nothing. */
  readonly edgeFrom: Int32Array;
  readonly edgeTo: Int32Array;
}

/** Neighbours of node i: neighbour[start[i]] … neighbour[start[i + 1] − 1], each once, never i itself. */
export interface Adjacency {
  readonly start: Int32Array;
  readonly neighbour: Int32Array;
}

/** Lists the distinct neighbours of every node. O(nodes + edges). */
export function adjacencyOf(pattern: GraphPattern): Adjacency {
  const { nodeCount, edgeFrom, edgeTo } = pattern;
  const rawStart = new Int32Array(nodeCount + 1);
  for (let e = 0; e < edgeFrom.length; e++) {
    if (edgeFrom[e] === edgeTo[e]) continue;
    rawStart[edgeFrom[e] + 1]++;
    rawStart[edgeTo[e] + 1]++;
  }
  for (let i = 0; i < nodeCount; i++) rawStart[i + 1] += rawStart[i];
  const neighbour = new Int32Array(rawStart[nodeCount]);
  const cursor = rawStart.slice(0, nodeCount);
  for (let e = 0; e < edgeFrom.length; e++) {
    const a = edgeFrom[e];
    const b = edgeTo[e];
    if (a === b) continue;
    neighbour[cursor[a]++] = b;
    neighbour[cursor[b]++] = a;
  }
  return withoutDoubles(rawStart, neighbour);
}

function withoutDoubles(rawStart: Int32Array, neighbour: Int32Array): Adjacency {
  const nodeCount = rawStart.length - 1;
  const start = new Int32Array(nodeCount + 1);
  const lastSeenBy = new Int32Array(nodeCount).fill(-1);
  let kept = 0;
  for (let i = 0; i < nodeCount; i++) {
    for (let p = rawStart[i]; p < rawStart[i + 1]; p++) {
      const j = neighbour[p];
      if (lastSeenBy[j] === i) continue;
      lastSeenBy[j] = i;
      neighbour[kept++] = j;
    }
    start[i + 1] = kept;
  }
  return { start, neighbour: neighbour.subarray(0, kept) };
}
