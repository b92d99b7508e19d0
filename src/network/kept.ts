import { type Groups, toGroups } from '../groups.ts';
import { type Draft, endPosition } from './draft.ts';
import type { Stops } from './stops.ts';

/** A part of each centreline, by position. */
export interface Part {
  readonly from: Float64Array;
  readonly to: Float64Array;
}

/** The part of each centreline that is kept; and what was left out at each end (2c, 2c + 1), mm. */
export interface Kept extends Part {
  readonly leftOutMm: Float64Array;
}

/** All of each centreline, with what it was carried on by. */
export function wholeCentrelines(draft: Draft): Part {
  const n = draft.pieces.centrelineCount;
  const whole = { from: new Float64Array(n), to: new Float64Array(n) };
  for (let c = 0; c < n; c++) {
    whole.from[c] = endPosition(draft, 2 * c);
    whole.to[c] = endPosition(draft, 2 * c + 1);
  }
  return whole;
}

/** The stops of every node (by root), without those beyond a part of their centreline. */
export function stopsByNode({ nodes }: Draft, stops: Stops, { from, to }: Part): Groups {
  const root = new Int32Array(stops.count);
  for (let k = 0; k < stops.count; k++) {
    const c = stops.centreline[k];
    root[k] = stops.to[k] < from[c] || stops.from[k] > to[c] ? -1 : nodes.find(stops.node[k]);
  }
  return toGroups(nodes.size, root);
}

/** The end of that part of its centreline that a stop stands at, −1 for an inner stop. */
export function endAtStop(
  { pieces, slackMm }: Draft,
  stops: Stops,
  { from, to }: Part,
  stop: number,
): number {
  const c = stops.centreline[stop];
  if (pieces.centrelineClosed[c] === 1) return -1;
  if (stops.from[stop] - from[c] <= slackMm) return 2 * c;
  return to[c] - stops.to[stop] <= slackMm ? 2 * c + 1 : -1;
}
