import type { Network } from '../network/types.ts';

const known = new WeakMap<Network, { readonly first: Int32Array; readonly of: Int32Array }>();

/** The reaches of one channel, in drawn order. */
export function channelReaches(network: Network, channel: number): Int32Array {
  let index = known.get(network);
  if (index === undefined) {
    index = indexReaches(network);
    known.set(network, index);
  }
  return index.of.subarray(index.first[channel], index.first[channel + 1]);
}

function indexReaches({ chip, reachCount, reachChannel, reachNumber }: Network) {
  const first = new Int32Array(chip.channels.length + 1);
  for (let r = 0; r < reachCount; r++) first[reachChannel[r] + 1]++;
  for (let c = 0; c < chip.channels.length; c++) first[c + 1] += first[c];
  const of = new Int32Array(reachCount);
  for (let r = 0; r < reachCount; r++) of[first[reachChannel[r]] + reachNumber[r] - 1] = r;
  return { first, of };
}

/**
 * Reaches that fluid passes one after the other: consecutive ones that join end to start, when all flow the same way along the
 * drawing; else each for itself. The residence rule goes by the same groups.
 */
export function passagesOf(
  { reachFrom, reachTo }: Pick<Network, 'reachFrom' | 'reachTo'>,
  reaches: readonly number[],
  flow: Float64Array,
): (readonly number[])[] {
  const passages: (readonly number[])[] = [];
  for (let k = 0; k < reaches.length; ) {
    let end = k + 1;
    while (end < reaches.length && reachTo[reaches[end - 1]] === reachFrom[reaches[end]]) end++;
    const chain = reaches.slice(k, end);
    const sign = Math.sign(flow[chain[0]]);
    const isOneWay = sign !== 0 && chain.every((reach) => Math.sign(flow[reach]) === sign);
    if (isOneWay) passages.push(chain);
    else for (const reach of chain) passages.push([reach]);
    k = end;
  }
  return passages;
}
