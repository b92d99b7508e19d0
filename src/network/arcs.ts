import type { Draft } from './draft.ts';
import type { Kept } from './kept.ts';
import type { Stops } from './stops.ts';
import type { NetworkTrace } from './types.ts';

/** Shorter than this there is no reach: its nodes are one. Far above rounding, far below anything drawn. */
export const NO_LENGTH_MM = 1e-9;

/** Stretches of centreline between neighbouring nodes outside wells. */
export interface Arcs
  extends Pick<NetworkTrace, 'arcCount' | 'arcCentreline' | 'arcFrom' | 'arcTo' | 'firstArc'> {
  /** Roots in draft.nodes, at the from and the to position. */
  readonly rootFrom: Int32Array;
  readonly rootTo: Int32Array;
}

/** Cuts each kept centreline at its stops. Makes the nodes of dead ends. A stretch without length joins its nodes. */
export function toArcs(draft: Draft, stops: Stops, kept: Kept): Arcs {
  const { pieces, nodes } = draft;
  const most = stops.count + pieces.centrelineCount;
  const arcCentreline = new Int32Array(most);
  const arcFrom = new Float64Array(most);
  const arcTo = new Float64Array(most);
  const nodeFrom = new Int32Array(most);
  const nodeTo = new Int32Array(most);
  const firstArc = new Int32Array(pieces.centrelineCount + 1);
  let arcCount = 0;
  const add = (c: number, from: number, to: number, atFrom: number, atTo: number): void => {
    if (to - from <= NO_LENGTH_MM) {
      nodes.unite(atFrom, atTo);
      return;
    }
    arcCentreline[arcCount] = c;
    arcFrom[arcCount] = from;
    arcTo[arcCount] = to;
    nodeFrom[arcCount] = atFrom;
    nodeTo[arcCount++] = atTo;
  };
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const start = kept.from[c];
    const end = kept.to[c];
    let position = start;
    let node = -1;
    firstArc[c] = arcCount;
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
      add(c, position, end, node, arcCount > firstArc[c] ? nodeFrom[firstArc[c]] : node);
    } else if (end - position > draft.slackMm) add(c, position, end, node, nodes.add());
  }
  firstArc[pieces.centrelineCount] = arcCount;
  return {
    arcCount,
    arcCentreline: arcCentreline.subarray(0, arcCount),
    arcFrom: arcFrom.subarray(0, arcCount),
    arcTo: arcTo.subarray(0, arcCount),
    firstArc,
    rootFrom: nodeFrom.subarray(0, arcCount).map((node) => nodes.find(node)),
    rootTo: nodeTo.subarray(0, arcCount).map((node) => nodes.find(node)),
  };
}
