import type { StripEnds } from '../geometry/strip.ts';
import type { Groups } from '../groups.ts';
import { type Draft, NodeUnion } from './draft.ts';
import { isEqualDuct } from './equal-ducts.ts';
import { endAtStop, type Kept } from './kept.ts';
import type { Stops } from './stops.ts';

/** Strips as rule 5 sees them. */
export interface UnitedStrips {
  /** The first centreline of the strip that each centreline belongs to. */
  readonly group: Int32Array;
  readonly ends: StripEnds;
}

/** Strips of equal width and depth that meet end to end are one strip, and the seam between them is an inner vertex. */
export function uniteEqualStrips(draft: Draft, stops: Stops, kept: Kept, byNode: Groups): UnitedStrips {
  const { centrelineCount, centrelineChannel } = draft.pieces;
  const { channels } = draft.chip;
  const strips = new NodeUnion(centrelineCount);
  // All centrelines of one channel are one strip.
  for (let c = 1; c < centrelineCount; c++) {
    if (centrelineChannel[c] === centrelineChannel[c - 1]) strips.unite(c, c - 1);
  }
  const seam = new Uint8Array(2 * centrelineCount);
  const seamWith = new Int32Array(2 * centrelineCount).fill(-1);
  const isOneStrip = (one: number, two: number): boolean => {
    const [a, b] = [channels[centrelineChannel[one >> 1]], channels[centrelineChannel[two >> 1]]];
    return a.plane === b.plane && isEqualDuct(a, b);
  };
  const heads: number[] = [];
  for (let node = draft.portCount; node + 1 < byNode.first.length; node++) {
    heads.length = 0;
    for (let m = byNode.first[node]; m < byNode.first[node + 1]; m++) {
      const end = endAtStop(draft, stops, kept, byNode.item[m]);
      if (end < 0) continue;
      const head = heads.find((other) => isOneStrip(other, end));
      if (head === undefined) {
        heads.push(end);
        continue;
      }
      // Of three equal ends none goes on in just one other.
      const isThird = seam[head] === 1;
      seamWith[end] = isThird ? -1 : head;
      if (isThird && seamWith[head] >= 0) seamWith[seamWith[head]] = -1;
      seamWith[head] = isThird ? -1 : end;
      seam[head] = 1;
      seam[end] = 1;
      strips.unite(head >> 1, end >> 1);
    }
  }
  const group = new Int32Array(centrelineCount);
  for (let c = 0; c < centrelineCount; c++) group[c] = strips.find(c);
  return { group, ends: { seam, seamWith } };
}
