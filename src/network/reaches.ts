import { pieceAt } from '../geometry/pieces.ts';
import { type Draft, pointAt } from './draft.ts';
import type { Kept } from './overshoot.ts';
import type { Stops } from './stops.ts';
import { countedLength, type Trims } from './trimming.ts';

/** Shorter than this there is no reach: its nodes are one. Far above rounding, far below anything drawn. */
const NO_LENGTH_MM = 1e-9;

/** Two straight pieces that turn by less than this are one segment. */
const COLLINEAR_SINE = 1e-9;

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

/** Reaches as chains of arcs, and their segments, as columns. */
export interface Reaches {
  readonly count: number;
  readonly channel: Int32Array;
  /** Roots in draft.nodes. */
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly drawnMm: Float64Array;
  /** Length that counts, without what joints add: by rule 5 alone, and with resolved joints. */
  readonly byRuleMm: Float64Array;
  readonly resolvedMm: Float64Array;
  readonly firstSegment: Int32Array;
  /** Reach of each arc. */
  readonly arcReach: Int32Array;
  /** 1 where the reach runs against the drawn direction of the arc's centreline. */
  readonly arcReversed: Uint8Array;
  readonly segments: SegmentColumns;
}

export class SegmentColumns {
  readonly reach: number[] = [];
  readonly x1: number[] = [];
  readonly y1: number[] = [];
  readonly x2: number[] = [];
  readonly y2: number[] = [];
  readonly ductMm: number[] = [];
  readonly bendRadius: number[] = [];

  get count(): number {
    return this.reach.length;
  }
}

/** Rule 7: arcs of one channel that meet in a node of degree two are one reach, in drawn direction. */
export function toReaches(draft: Draft, arcs: Arcs, trims: Trims): Reaches {
  const { factorByRule, factorResolved } = trims;
  const factors = draft.chip.joints === 'resolved' ? factorResolved : factorByRule;
  const through = throughNodes(draft, arcs);
  const channel: number[] = [];
  const from: number[] = [];
  const to: number[] = [];
  const drawnMm: number[] = [];
  const byRuleMm: number[] = [];
  const resolvedMm: number[] = [];
  const firstSegment: number[] = [0];
  const arcReach = new Int32Array(arcs.count).fill(-1);
  const arcReversed = new Uint8Array(arcs.count);
  const segments = new SegmentColumns();
  for (let a = 0; a < arcs.count; a++) {
    if (arcReach[a] >= 0) continue;
    const chain = chainOf(through, a);
    const reach = channel.length;
    let drawn = 0;
    let byRule = 0;
    let resolved = 0;
    for (const side of chain) {
      const arc = side >> 1;
      arcReach[arc] = reach;
      arcReversed[arc] = side & 1;
      drawn += arcs.to[arc] - arcs.from[arc];
      byRule += countedLength(trims, factorByRule, arcs.centreline[arc], arcs.from[arc], arcs.to[arc]);
      resolved += countedLength(trims, factorResolved, arcs.centreline[arc], arcs.from[arc], arcs.to[arc]);
    }
    // Between two strips that leave no wall between them nothing is left to resolve, and a duct without length has no flow:
    // the rule's length stands.
    const isWithinStrips = resolved <= NO_LENGTH_MM;
    if (isWithinStrips) resolved = byRule;
    const own = isWithinStrips ? factorByRule : factors;
    for (const side of chain) {
      addSegments(draft, arcs, trims, own, segments, side >> 1, (side & 1) === 1, reach, firstSegment[reach]);
    }
    const head = chain[0];
    const tail = chain[chain.length - 1];
    channel.push(draft.pieces.centrelineChannel[arcs.centreline[a]]);
    from.push((head & 1) === 0 ? arcs.nodeFrom[head >> 1] : arcs.nodeTo[head >> 1]);
    to.push((tail & 1) === 0 ? arcs.nodeTo[tail >> 1] : arcs.nodeFrom[tail >> 1]);
    drawnMm.push(drawn);
    byRuleMm.push(byRule);
    resolvedMm.push(resolved);
    firstSegment.push(segments.count);
  }
  return {
    count: channel.length,
    channel: new Int32Array(channel),
    from: new Int32Array(from),
    to: new Int32Array(to),
    drawnMm: new Float64Array(drawnMm),
    byRuleMm: new Float64Array(byRuleMm),
    resolvedMm: new Float64Array(resolvedMm),
    firstSegment: new Int32Array(firstSegment),
    arcReach,
    arcReversed,
    segments,
  };
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

/**
 * For each arc side (2a at its from node, 2a + 1 at its to node) the other arc side that it goes on in, where exactly two
 * sides of one channel meet in a node that is no port; −1 elsewhere.
 */
function throughNodes(draft: Draft, arcs: Arcs): Int32Array {
  const sides = sidesByNode(draft, arcs);
  const next = new Int32Array(2 * arcs.count).fill(-1);
  const channelOf = (side: number): number => draft.pieces.centrelineChannel[arcs.centreline[side >> 1]];
  for (let node = draft.portCount; node < draft.nodes.size; node++) {
    if (sides.first[node + 1] - sides.first[node] !== 2) continue;
    const one = sides.side[sides.first[node]];
    const two = sides.side[sides.first[node] + 1];
    if (channelOf(one) !== channelOf(two)) continue;
    next[one] = two;
    next[two] = one;
  }
  return next;
}

/** The whole chain that arc a belongs to, as 2·arc + (1 when walked against its drawn direction), in a's direction. */
function chainOf(next: Int32Array, a: number): number[] {
  const forward = [2 * a];
  // Leaving an arc walked forward is its side 1; the side that we come in by says how the next arc is walked.
  for (let side = next[2 * a + 1]; side >= 0; ) {
    const arc = side >> 1;
    if (arc === a) return forward;
    const reversed = side & 1;
    forward.push(2 * arc + reversed);
    side = next[2 * arc + (reversed === 1 ? 0 : 1)];
  }
  const backward: number[] = [];
  for (let side = next[2 * a]; side >= 0; ) {
    const arc = side >> 1;
    // We come in by the arc's end: in a's direction it is walked forward when we come in by its side 1.
    const reversed = (side & 1) === 1 ? 0 : 1;
    backward.push(2 * arc + reversed);
    side = next[2 * arc + (reversed === 1 ? 1 : 0)];
  }
  return backward.reverse().concat(forward);
}

/** Adds the straight pieces of one arc to the reach's segments, each with the length that counts. */
function addSegments(
  draft: Draft,
  arcs: Arcs,
  trims: Trims,
  factors: Float64Array,
  segments: SegmentColumns,
  arc: number,
  reversed: boolean,
  reach: number,
  firstSegment: number,
): void {
  const { pieces } = draft;
  const c = arcs.centreline[arc];
  const length = pieces.centrelineLength[c];
  const cuts = [arcs.from[arc]];
  const radii: number[] = [];
  const end = arcs.to[arc];
  if (cuts[0] < 0) addCut(Math.min(0, end), 0);
  if (end > 0 && cuts[cuts.length - 1] < length) {
    for (let i = pieceAt(pieces, c, cuts[cuts.length - 1]); i < pieces.firstPiece[c + 1]; i++) {
      const isLast = i === pieces.firstPiece[c + 1] - 1;
      // A chord is one segment, however finely it was cut for its walls.
      if (!isLast && pieces.chord[i + 1] === pieces.chord[i] && pieces.start[i + 1] < end) continue;
      addCut(Math.min(end, isLast ? length : pieces.start[i + 1]), pieces.bendRadius[i]);
      if (cuts[cuts.length - 1] >= end) break;
    }
  }
  if (cuts[cuts.length - 1] < end) addCut(end, 0);

  const from = { x: 0, y: 0 };
  const to = { x: 0, y: 0 };
  const n = radii.length;
  for (let k = 0; k < n; k++) {
    const i = reversed ? n - 1 - k : k;
    const counted = countedLength(trims, factors, c, cuts[i], cuts[i + 1]);
    pointAt(draft, c, reversed ? cuts[i + 1] : cuts[i], from);
    pointAt(draft, c, reversed ? cuts[i] : cuts[i + 1], to);
    addSegment(segments, reach, firstSegment, from, to, counted, radii[i]);
  }

  function addCut(position: number, radius: number): void {
    if (position - cuts[cuts.length - 1] <= 0) return;
    cuts.push(position);
    radii.push(radius);
  }
}

function addSegment(
  segments: SegmentColumns,
  reach: number,
  firstSegment: number,
  from: { readonly x: number; readonly y: number },
  to: { readonly x: number; readonly y: number },
  ductMm: number,
  bendRadius: number,
): void {
  const last = segments.count - 1;
  if (last >= firstSegment && bendRadius === 0 && segments.bendRadius[last] === 0) {
    const ux = segments.x2[last] - segments.x1[last];
    const uy = segments.y2[last] - segments.y1[last];
    const vx = to.x - from.x;
    const vy = to.y - from.y;
    const product = Math.hypot(ux, uy) * Math.hypot(vx, vy);
    if (Math.abs(ux * vy - uy * vx) <= COLLINEAR_SINE * product && ux * vx + uy * vy > 0) {
      segments.x2[last] = to.x;
      segments.y2[last] = to.y;
      segments.ductMm[last] += ductMm;
      return;
    }
  }
  segments.reach.push(reach);
  segments.x1.push(from.x);
  segments.y1.push(from.y);
  segments.x2.push(to.x);
  segments.y2.push(to.y);
  segments.ductMm.push(ductMm);
  segments.bendRadius.push(bendRadius);
}
