import type { StripEnds } from '../geometry/strip.ts';
import type { Groups } from '../groups.ts';
import type { Arcs } from './arcs.ts';
import type { Bundles } from './bundles.ts';
import { type Draft, END_FREE, END_IN_PORT } from './draft.ts';
import type { Kept } from './kept.ts';
import type { Nodes } from './nodes.ts';
import type { Reaches } from './reaches.ts';
import type { Stops } from './stops.ts';
import { type EndFate, type NetworkTrace, NODE_KINDS } from './types.ts';

/** What the joining rules made, one after the other. */
export interface Traced {
  readonly draft: Draft;
  readonly bundles: Bundles;
  readonly stops: Stops;
  readonly kept: Kept;
  readonly arcs: Arcs;
  readonly byNode: Groups;
  readonly strips: StripEnds;
  readonly reaches: Reaches;
  readonly nodes: Nodes;
}

/** The drawing side of the network. */
export function toTrace(traced: Traced): NetworkTrace {
  const { draft, bundles, kept, arcs, strips, reaches, nodes } = traced;
  const { rootFrom, rootTo, ...columns } = arcs;
  const arcNodeFrom = rootFrom.map((root) => nodes.ofRoot[root]);
  const arcNodeTo = rootTo.map((root) => nodes.ofRoot[root]);
  return {
    near: draft.near,
    ...columns,
    arcReach: reaches.arcReach,
    arcReversed: reaches.arcReversed,
    arcNodeFrom,
    arcNodeTo,
    ...toEndColumns(traced, arcNodeFrom, arcNodeTo),
    endExtensionMm: draft.ends.extension,
    endLeftOutMm: kept.leftOutMm,
    endJoinedTo: draft.ends.joinedTo,
    endBundle: bundles.of,
    strips,
    ...toPlaces(traced),
  };
}

function toEndColumns(
  { draft, kept, arcs: { firstArc }, nodes: { nodeKind } }: Traced,
  arcNodeFrom: Int32Array,
  arcNodeTo: Int32Array,
) {
  const { centrelineCount, centrelineClosed } = draft.pieces;
  const endNode = new Int32Array(2 * centrelineCount).fill(-1);
  const endFate: EndFate[] = new Array(2 * centrelineCount);
  for (let end = 0; end < endNode.length; end++) {
    const c = end >> 1;
    endFate[end] = fateOf(draft, kept, end);
    const hasArcs = firstArc[c + 1] > firstArc[c];
    if (endFate[end] === 'left out' || !hasArcs || centrelineClosed[c] === 1) continue;
    endNode[end] = (end & 1) === 0 ? arcNodeFrom[firstArc[c]] : arcNodeTo[firstArc[c + 1] - 1];
    // Another channel's end may have been carried on to this one.
    const meetsOthers = endNode[end] >= 0 && NODE_KINDS[nodeKind[endNode[end]]] !== 'end';
    if (endFate[end] === 'open' && meetsOthers) endFate[end] = 'joined';
  }
  return { endFate, endNode };
}

function fateOf({ pieces, ends }: Draft, { leftOutMm }: Kept, end: number): EndFate {
  if (leftOutMm[end] > 0) return 'left out';
  if (pieces.centrelineClosed[end >> 1] === 1) return 'joined';
  const state = ends.state[end];
  return state === END_FREE ? 'open' : state === END_IN_PORT ? 'port' : 'joined';
}

function toPlaces({ stops, byNode, nodes }: Traced) {
  const firstPlace = new Int32Array(nodes.nodeCount + 1);
  const placeCentreline = new Int32Array(stops.count);
  const placeFrom = new Float64Array(stops.count);
  const placeTo = new Float64Array(stops.count);
  let count = 0;
  for (let node = 0; node < nodes.nodeCount; node++) {
    const root = nodes.rootOf[node];
    for (let k = byNode.first[root]; k < byNode.first[root + 1]; k++, count++) {
      const stop = byNode.item[k];
      placeCentreline[count] = stops.centreline[stop];
      placeFrom[count] = stops.from[stop];
      placeTo[count] = stops.to[stop];
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
