import { sidesByNode } from '../groups.ts';
import { type Arcs, NO_LENGTH_MM } from './arcs.ts';
import { passages, toChains } from './chains.ts';
import type { Draft } from './draft.ts';
import { type Segments, SegmentWriter } from './segments.ts';
import { countedLength, type Trims } from './trims.ts';
import type { Network, NetworkTrace } from './types.ts';

/** Reaches as chains of arcs, and their segments. */
export interface Reaches
  extends Segments,
    Pick<Network, 'reachCount' | 'reachChannel' | 'reachDrawnMm' | 'reachCentrelineMm'>,
    Pick<NetworkTrace, 'arcReach' | 'arcReversed'> {
  /** Roots in draft.nodes. */
  readonly rootFrom: Int32Array;
  readonly rootTo: Int32Array;
  /** Length that counts with resolved joints, without what they add. */
  readonly resolvedMm: Float64Array;
}

/** Rule 7: arcs of one channel that meet in a node of degree two are one reach, in drawn direction. */
export function toReaches(draft: Draft, arcs: Arcs, trims: Trims): Reaches {
  const { factorByRule, factorResolved } = trims;
  const factors = draft.chip.joints === 'resolved' ? factorResolved : factorByRule;
  const { centrelineChannel } = draft.pieces;
  const { arcCentreline, arcFrom, arcTo, rootFrom, rootTo } = arcs;
  const sides = sidesByNode(draft.nodes.size, rootFrom, rootTo);
  const isOneChannel = (a: number, b: number): boolean =>
    centrelineChannel[arcCentreline[a]] === centrelineChannel[arcCentreline[b]];
  const chains = toChains(passages(sides, draft.portCount, isOneChannel));
  const { count } = chains;
  const reaches = {
    reachCount: count,
    reachChannel: new Int32Array(count),
    reachDrawnMm: new Float64Array(count),
    reachCentrelineMm: new Float64Array(count),
    resolvedMm: new Float64Array(count),
    rootFrom: new Int32Array(count),
    rootTo: new Int32Array(count),
    arcReach: new Int32Array(arcs.arcCount),
    arcReversed: new Uint8Array(arcs.arcCount),
  };
  const segments = new SegmentWriter(draft, arcs, trims);
  for (let r = 0; r < count; r++) {
    const begin = chains.first[r];
    const end = chains.first[r + 1];
    let drawn = 0;
    let byRule = 0;
    let resolved = 0;
    for (let k = begin; k < end; k++) {
      const arc = chains.side[k] >> 1;
      const [c, from, to] = [arcCentreline[arc], arcFrom[arc], arcTo[arc]];
      reaches.arcReach[arc] = r;
      reaches.arcReversed[arc] = chains.side[k] & 1;
      drawn += to - from;
      byRule += countedLength(trims, factorByRule, c, from, to);
      resolved += countedLength(trims, factorResolved, c, from, to);
    }
    // Between two strips that leave no wall between them nothing is left to resolve, and a duct without length has no flow:
    // the rule's length stands.
    const isWithinStrips = resolved <= NO_LENGTH_MM;
    segments.beginReach(isWithinStrips ? factorByRule : factors);
    for (let k = begin; k < end; k++) segments.addArc(chains.side[k]);
    const head = chains.side[begin];
    const tail = chains.side[end - 1];
    reaches.reachChannel[r] = centrelineChannel[arcCentreline[head >> 1]];
    reaches.reachDrawnMm[r] = drawn;
    reaches.reachCentrelineMm[r] = byRule;
    reaches.resolvedMm[r] = isWithinStrips ? byRule : resolved;
    reaches.rootFrom[r] = ((head & 1) === 0 ? rootFrom : rootTo)[head >> 1];
    reaches.rootTo[r] = ((tail & 1) === 0 ? rootTo : rootFrom)[tail >> 1];
  }
  return { ...reaches, ...segments.columns() };
}
