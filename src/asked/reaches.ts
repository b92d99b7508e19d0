import { type Groups, itemsOf, toGroups } from '../groups.ts';
import type { Network } from '../network/types.ts';

const known = new WeakMap<Network, Groups>();

/** The reaches of one channel, in drawn order. Sorted once for each network: cost of a call O(1). */
export function reachesOfChannel(network: Network, channel: number): Int32Array {
  let groups = known.get(network);
  if (groups === undefined) {
    groups = toGroups(network.chip.channels.length, network.reachChannel);
    known.set(network, groups);
  }
  return itemsOf(groups, channel);
}
