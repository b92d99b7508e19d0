/** A graph in which something may flow: nodes, and edges between them. */
export interface FlowGraph {
  readonly nodeCount: number;
  /** Ends of each edge. Parallel edges each carry their own; an edge from a node to itself carries 0. */
  readonly from: Int32Array;
  readonly to: Int32Array;
}
