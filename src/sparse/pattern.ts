import { sidesByNode } from '../groups.ts';

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
export function adjacencyOf({ nodeCount, edgeFrom, edgeTo }: GraphPattern): Adjacency {
  const { first, item: side } = sidesByNode(nodeCount, edgeFrom, edgeTo);
  const start = new Int32Array(nodeCount + 1);
  const neighbour = new Int32Array(side.length);
  const lastSeenBy = new Int32Array(nodeCount).fill(-1);
  let kept = 0;
  for (let i = 0; i < nodeCount; i++) {
    lastSeenBy[i] = i;
    for (let p = first[i]; p < first[i + 1]; p++) {
      const j = (side[p] & 1 ? edgeFrom : edgeTo)[side[p] >> 1];
      if (lastSeenBy[j] === i) continue;
      lastSeenBy[j] = i;
      neighbour[kept++] = j;
    }
    start[i + 1] = kept;
  }
  return { start, neighbour: neighbour.subarray(0, kept) };
}
