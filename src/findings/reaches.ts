import { reachesOfChannel } from '../asked/reaches.ts';
import { reachName } from '../network/names.ts';
import type { Network } from '../network/types.ts';
import type { Place } from './closest.ts';
import type { FindingContext } from './context.ts';
import type { Finding } from './types.ts';

/** The worst reach of a channel by some measure, and how many reaches are at fault. */
export interface Worst<T> {
  readonly reach: number;
  readonly fault: T;
  readonly faulty: readonly number[];
}

/**
 * Looks at every reach of a channel: `look` gives what is wrong there, null for nothing; `badness` says which fault is the
 * worst (of equals the first). Null when nothing is wrong: one finding per channel, at its worst place.
 */
export function worstReach<T>(
  reaches: Iterable<number>,
  look: (reach: number) => T | null,
  badness: (fault: T) => number,
): Worst<T> | null {
  let worst: { reach: number; fault: T } | null = null;
  let most = 0;
  const faulty: number[] = [];
  for (const reach of reaches) {
    const fault = look(reach);
    if (fault === null) continue;
    faulty.push(reach);
    const bad = badness(fault);
    if (worst === null || bad > most * (1 + SAME)) {
      worst = { reach, fault };
      most = bad;
    }
  }
  return worst === null ? null : { ...worst, faulty };
}

/** Faults that differ by rounding only are equal, so that a turned drawing points at the same place. */
const SAME = 1e-9;

/** What a finding at a channel's worst reach needs besides what it says. */
export interface AtWorst {
  readonly reach: number;
  readonly name: string;
  /** As of othersText. */
  readonly others: string;
  readonly place: Place;
  readonly names: readonly string[];
}

/** One finding for each channel at fault, at its worst reach. */
export function perChannel<T>(
  context: FindingContext,
  look: (reach: number, channel: number) => T | null,
  badness: (fault: T) => number,
  say: (fault: T, worst: AtWorst) => Finding,
): Finding[] {
  const { network, chip } = context;
  return chip.channels.flatMap((_, channel) => {
    const worst = worstReach(
      reachesOfChannel(context.network, channel),
      (reach) => look(reach, channel),
      badness,
    );
    if (worst === null) return [];
    const { reach, fault } = worst;
    const at = {
      reach,
      name: reachName(network, reach),
      others: othersText(context, worst),
      place: middleOfReach(network, reach),
      names: reachNames(context, worst),
    };
    return [say(fault, at)];
  });
}

/** The worst reach first, then the channel, then the other reaches at fault. */
export function reachNames({ network, chip }: FindingContext, { reach, faulty }: Worst<unknown>): string[] {
  const channel = chip.channels[network.reachChannel[reach]].name;
  const others = faulty.filter((other) => other !== reach).map((r) => reachName(network, r));
  return [...new Set([reachName(network, reach), channel, ...others])];
}

/** " (and in 3 more reaches of lane)" for a message, nothing when there are none. */
export function othersText({ network, chip }: FindingContext, { reach, faulty }: Worst<unknown>): string {
  const others = faulty.length - 1;
  if (others === 0) return '';
  const { name } = chip.channels[network.reachChannel[reach]];
  return ` (and in ${others} more ${others === 1 ? 'reach' : 'reaches'} of ${name})`;
}

/** Middle of a reach along its centreline, mm. */
export function middleOfReach(network: Network, reach: number): Place {
  let total = 0;
  for (let s = network.firstSegment[reach]; s < network.firstSegment[reach + 1]; s++)
    total += lengthOf(network, s);
  return alongReach(network, reach, total / 2);
}

/** The place `alongMm` from the reach's first node, mm; clamped to its ends. */
export function alongReach(network: Network, reach: number, alongMm: number): Place {
  const end = network.firstSegment[reach + 1];
  let left = alongMm;
  for (let s = network.firstSegment[reach]; s < end; s++) {
    const length = lengthOf(network, s);
    if (left <= length || s === end - 1) {
      const t = length === 0 ? 0 : Math.max(0, Math.min(1, left / length));
      return {
        xMm: network.segmentX1[s] + t * (network.segmentX2[s] - network.segmentX1[s]),
        yMm: network.segmentY1[s] + t * (network.segmentY2[s] - network.segmentY1[s]),
      };
    }
    left -= length;
  }
  const node = network.reachFrom[reach];
  return { xMm: network.nodeX[node], yMm: network.nodeY[node] };
}

function lengthOf(network: Network, s: number): number {
  return Math.hypot(network.segmentX2[s] - network.segmentX1[s], network.segmentY2[s] - network.segmentY1[s]);
}
