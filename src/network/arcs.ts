import type { Draft } from './draft.ts';
import type { Kept } from './kept.ts';
import type { Stops } from './stops.ts';

/** Shorter than this there is no reach: its nodes are one. Far above rounding, far below anything drawn. */
export const NO_LENGTH_MM = 1e-9;

/** Stretches of centreline between neighbouring nodes outside wells: columns, by centreline and position. */
export interface Arcs {
  readonly count: number;
  readonly centreline: number[];
  readonly from: number[];
  readonly to: number[];
  /** Roots in draft.nodes, at the from and the to position. */
  readonly nodeFrom: number[];
  readonly nodeTo: number[];
}

/** Cuts each kept centreline at its stops. Makes the nodes of dead ends. A stretch without length joins its nodes. */
export function toArcs(draft: Draft, stops: Stops, kept: Kept): Arcs {
  const { pieces, nodes } = draft;
  const arcs = { count: 0, centreline: [], from: [], to: [], nodeFrom: [], nodeTo: [] } as {
    count: number;
    centreline: number[];
    from: number[];
    to: number[];
    nodeFrom: number[];
    nodeTo: number[];
  };
  const add = (c: number, from: number, to: number, nodeFrom: number, nodeTo: number): void => {
    if (to - from <= NO_LENGTH_MM) {
      nodes.unite(nodeFrom, nodeTo);
      return;
    }
    arcs.centreline.push(c);
    arcs.from.push(from);
    arcs.to.push(to);
    arcs.nodeFrom.push(nodeFrom);
    arcs.nodeTo.push(nodeTo);
    arcs.count++;
  };
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const start = kept.from[c];
    const end = kept.to[c];
    let position = start;
    let node = -1;
    for (let k = stops.firstStop[c]; k < stops.firstStop[c + 1]; k++) {
      if (stops.to[k] < start - NO_LENGTH_MM || stops.from[k] > end + NO_LENGTH_MM) continue;
      if (node < 0) {
        // The middle of places joined at the end itself may lie half a slack inside it. A closed centreline has no end.
        const isEnd = pieces.centrelineClosed[c] === 0 && stops.from[k] - start <= draft.slackMm;
        if (isEnd) {
          node = stops.node[k];
          position = stops.to[k];
          continue;
        }
        node = nodes.add();
      }
      add(c, position, stops.from[k], node, stops.node[k]);
      node = stops.node[k];
      position = stops.to[k];
    }
    if (node < 0) node = nodes.add();
    if (pieces.centrelineClosed[c] === 1) {
      // The first point is a node of its own until rule 7 joins what meets there.
      const first = firstNodeOf(arcs, c);
      add(c, position, end, node, first ?? node);
    } else if (end - position > draft.slackMm) add(c, position, end, node, nodes.add());
  }
  for (let a = 0; a < arcs.count; a++) {
    arcs.nodeFrom[a] = nodes.find(arcs.nodeFrom[a]);
    arcs.nodeTo[a] = nodes.find(arcs.nodeTo[a]);
  }
  return arcs;
}

function firstNodeOf(
  arcs: { centreline: number[]; nodeFrom: number[]; count: number },
  c: number,
): number | null {
  for (let a = arcs.count - 1, first: number | null = null; ; a--) {
    if (a < 0 || arcs.centreline[a] !== c) return first;
    first = arcs.nodeFrom[a];
  }
}

/** For each node root, the arc sides (2a at the arc's from node, 2a + 1 at its to node) that come to it. */
export function sidesByNode(
  draft: Draft,
  arcs: Arcs,
): { readonly first: Int32Array; readonly side: Int32Array } {
  const first = new Int32Array(draft.nodes.size + 1);
  for (let a = 0; a < arcs.count; a++) {
    first[arcs.nodeFrom[a] + 1]++;
    first[arcs.nodeTo[a] + 1]++;
  }
  for (let i = 0; i < draft.nodes.size; i++) first[i + 1] += first[i];
  const fill = first.slice();
  const side = new Int32Array(2 * arcs.count);
  for (let a = 0; a < arcs.count; a++) {
    side[fill[arcs.nodeFrom[a]]++] = 2 * a;
    side[fill[arcs.nodeTo[a]]++] = 2 * a + 1;
  }
  return { first, side };
}
