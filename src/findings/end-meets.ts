import type { Network } from '../network/types.ts';

/** Whether an end was carried on to another centreline, or ends at one place with an end of it. */
export function endMeets({ trace }: Network, end: number, other: number): boolean {
  const { endJoinedTo, endBundle } = trace;
  if (endJoinedTo[end] === other) return true;
  if (endBundle[end] < 0) return false;
  return [2 * other, 2 * other + 1].some((e) => e !== end && endBundle[e] === endBundle[end]);
}
