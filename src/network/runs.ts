import type { Draft } from './draft.ts';
import { isEqualDuct } from './equal-ducts.ts';
import type { Reaches } from './reaches.ts';

/**
 * Runs of equal duct: reaches joined where two strokes of one width and depth meet end to end. Such a seam is no node for
 * corners and bends (rules 3 and 8), so a stroke drawn in two resists as the same stroke drawn in one. Most runs are one
 * reach.
 */
export interface Runs {
  readonly count: number;
  /** Reaches of run n are reach[first[n]] … reach[first[n + 1] − 1], in order. */
  readonly first: Int32Array;
  readonly reach: Int32Array;
  /** 1 where the run goes through the reach against its own direction. */
  readonly reversed: Uint8Array;
  /** 1 where the last reach goes on in the first: no node interrupts it. */
  readonly isLoop: Uint8Array;
}

/** Chains reaches through their seams. Cost: linear in the reaches. */
export function toRuns(draft: Draft, reaches: Reaches): Runs {
  const next = seams(draft, reaches);
  if (next === null) return singleRuns(reaches.count);
  const first = [0];
  const reach = new Int32Array(reaches.count);
  const reversed = new Uint8Array(reaches.count);
  const loops: number[] = [];
  const seen = new Uint8Array(reaches.count);
  let filled = 0;
  for (let r = 0; r < reaches.count; r++) {
    if (seen[r] === 1) continue;
    const { side, isLoop } = startOf(next, r);
    // A side entered at a reach's start (even) goes with the reach, at its end (odd) against it.
    for (let entered = side; entered >= 0 && seen[entered >> 1] === 0; entered = next[entered ^ 1]) {
      seen[entered >> 1] = 1;
      reach[filled] = entered >> 1;
      reversed[filled++] = entered & 1;
    }
    first.push(filled);
    loops.push(isLoop ? 1 : 0);
  }
  return {
    count: loops.length,
    first: Int32Array.from(first),
    reach,
    reversed,
    isLoop: Uint8Array.from(loops),
  };
}

/** Without a seam every reach is a run. */
function singleRuns(count: number): Runs {
  return {
    count,
    first: Int32Array.from({ length: count + 1 }, (_, n) => n),
    reach: Int32Array.from({ length: count }, (_, n) => n),
    reversed: new Uint8Array(count),
    isLoop: new Uint8Array(count),
  };
}

/** The side (2r at a reach's start, 2r + 1 at its end) at which the run that holds a reach begins. */
function startOf(next: Int32Array, r: number): { readonly side: number; readonly isLoop: boolean } {
  let side = 2 * r;
  while (next[side] >= 0) {
    side = next[side] ^ 1;
    if (side === 2 * r) return { side, isLoop: true };
  }
  return { side, isLoop: false };
}

/** For each side of a reach, the side of the reach that it goes on in through a seam, −1 for none; null without any seam. */
function seams(draft: Draft, reaches: Reaches): Int32Array | null {
  const degree = new Int32Array(draft.nodes.size);
  for (let r = 0; r < reaches.count; r++) {
    degree[reaches.from[r]]++;
    degree[reaches.to[r]]++;
  }
  let isPossible = false;
  for (let node = draft.portCount; node < degree.length; node++) if (degree[node] === 2) isPossible = true;
  if (!isPossible) return null;
  const sideSum = new Float64Array(draft.nodes.size);
  for (let r = 0; r < reaches.count; r++) {
    sideSum[reaches.from[r]] += 2 * r;
    sideSum[reaches.to[r]] += 2 * r + 1;
  }
  const next = new Int32Array(2 * reaches.count).fill(-1);
  const { channels } = draft.chip;
  for (let side = 0; side < next.length; side++) {
    const r = side >> 1;
    const node = (side & 1) === 0 ? reaches.from[r] : reaches.to[r];
    if (node < draft.portCount || degree[node] !== 2) continue;
    const other = sideSum[node] - side;
    if (isEqualDuct(channels[reaches.channel[r]], channels[reaches.channel[other >> 1]])) next[side] = other;
  }
  return next;
}
