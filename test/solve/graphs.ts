import type { FlowGraph } from '../../src/solve/flow-graph.ts';

export function graphOf(nodeCount: number, edges: readonly (readonly [number, number])[]): FlowGraph {
  return {
    nodeCount,
    from: Int32Array.from(edges, ([a]) => a),
    to: Int32Array.from(edges, ([, b]) => b),
  };
}

/** Edges of m × n points joined along rows and columns; point (i, j) is node i·n + j. */
export function gridEdges(m: number, n: number): [number, number][] {
  const edges: [number, number][] = [];
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < n; j++) {
      if (j + 1 < n) edges.push([i * n + j, i * n + j + 1]);
      if (i + 1 < m) edges.push([i * n + j, i * n + n + j]);
    }
  }
  return edges;
}

/** Small, fast, seeded: mulberry32. */
export function randomFrom(seed: number): () => number {
  let a = seed | 0;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** A connected random graph: a random tree and some edges more. */
export function randomEdges(nodeCount: number, extra: number, random: () => number): [number, number][] {
  const edges: [number, number][] = [];
  for (let i = 1; i < nodeCount; i++) edges.push([Math.floor(random() * i), i]);
  for (let k = 0; k < extra; k++)
    edges.push([Math.floor(random() * nodeCount), Math.floor(random() * nodeCount)]);
  return edges;
}

export function shuffled(count: number, random: () => number): Int32Array {
  const order = Int32Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    const kept = order[i];
    order[i] = order[j];
    order[j] = kept;
  }
  return order;
}
