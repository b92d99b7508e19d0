import type { Network } from '../network/types.ts';

/** Whether an end was carried on to another centreline, or ends at one place with an end of it. */
export function endMeets({ trace }: Network, end: number, other: number): boolean {
  const { endJoinedTo, endBundle } = trace;
  if (endJoinedTo[end] === other) return true;
  if (endBundle[end] < 0) return false;
  return [2 * other, 2 * other + 1].some((e) => e !== end && endBundle[e] === endBundle[end]);
}

/** Whether a node has a place on a centreline, on the stretch between two positions. */
export function hasPlaceOn(
  { trace }: Network,
  node: number,
  centreline: number,
  from = -Infinity,
  to = Infinity,
): boolean {
  const { firstPlace, placeCentreline, placeFrom, placeTo } = trace;
  for (let k = firstPlace[node]; k < firstPlace[node + 1]; k++) {
    if (placeCentreline[k] === centreline && placeFrom[k] <= to && placeTo[k] >= from) return true;
  }
  return false;
}
