import type { Groups } from '../groups.ts';

/**
 * Lengths of duct, arcs or reaches, and how they go on in each other. Side 2a is where length a begins, 2a + 1 where it ends.
 * A chain is entered by a side: by an even one it goes with the length, by an odd one against it.
 */
export interface Chains {
  readonly count: number;
  /** Chain n enters its lengths by side[first[n]] … side[first[n + 1] − 1], in order. */
  readonly first: Int32Array;
  readonly side: Int32Array;
  /** 1 where the last length goes on in the first: no node interrupts it. */
  readonly isLoop: Uint8Array;
}

/**
 * For each side the other that its length goes on in, where just two come to a node that is no port and are of one duct;
 * −1 elsewhere.
 */
export function passages(
  { first, item }: Groups,
  portCount: number,
  isOneDuct: (a: number, b: number) => boolean,
): Int32Array {
  const next = new Int32Array(item.length).fill(-1);
  for (let node = portCount; node + 1 < first.length; node++) {
    if (first[node + 1] - first[node] !== 2) continue;
    const one = item[first[node]];
    const two = item[first[node] + 1];
    if (!isOneDuct(one >> 1, two >> 1)) continue;
    next[one] = two;
    next[two] = one;
  }
  return next;
}

/** Chains lengths through their passages, each in the direction of its first. Cost: linear in the lengths. */
export function toChains(next: Int32Array): Chains {
  const n = next.length / 2;
  const first = new Int32Array(n + 1);
  const side = new Int32Array(n);
  const isLoop = new Uint8Array(n);
  const seen = new Uint8Array(n);
  let count = 0;
  let filled = 0;
  for (let a = 0; a < n; a++) {
    if (seen[a] === 1) continue;
    const start = startOf(next, a);
    isLoop[count] = next[start] >= 0 ? 1 : 0;
    for (let entered = start; entered >= 0 && seen[entered >> 1] === 0; entered = next[entered ^ 1]) {
      seen[entered >> 1] = 1;
      side[filled++] = entered;
    }
    first[++count] = filled;
  }
  return { count, first: first.subarray(0, count + 1), side, isLoop: isLoop.subarray(0, count) };
}

/** The side by which the chain that holds a length is entered. */
function startOf(next: Int32Array, a: number): number {
  let side = 2 * a;
  while (next[side] >= 0) {
    side = next[side] ^ 1;
    if (side === 2 * a) break;
  }
  return side;
}
