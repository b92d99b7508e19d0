import { pieceAt } from '../geometry/pieces.ts';
import { type Arcs, NO_LENGTH_MM, sidesByNode } from './arcs.ts';
import { type Draft, pointAt } from './draft.ts';
import { countedLength, type Trims } from './trimming.ts';

/** Two straight pieces that turn by less than this are one segment. */
const COLLINEAR_SINE = 1e-9;

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

/** Scratch points of addSegments, which is asked for every arc of the chip. */
const FROM = { x: 0, y: 0 };
const TO = { x: 0, y: 0 };

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
  const add = (start: number, stop: number, radius: number): void => {
    const counted = countedLength(trims, factors, c, start, stop);
    pointAt(draft, c, reversed ? stop : start, FROM);
    pointAt(draft, c, reversed ? start : stop, TO);
    addSegment(segments, reach, firstSegment, FROM, TO, counted, radius);
  };
  // Most arcs lie on one piece.
  const piece = pieceAt(pieces, c, arcs.from[arc]);
  if (arcs.from[arc] >= pieces.start[piece] && arcs.to[arc] <= pieces.start[piece] + pieces.length[piece]) {
    add(arcs.from[arc], arcs.to[arc], pieces.bendRadius[piece]);
    return;
  }
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

  const n = radii.length;
  for (let k = 0; k < n; k++) {
    const i = reversed ? n - 1 - k : k;
    add(cuts[i], cuts[i + 1], radii[i]);
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
