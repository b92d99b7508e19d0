import type { Network } from '../network/types.ts';

/**
 * Reaches that fluid passes one after the other: consecutive ones that join end to start, when all flow the same way along the
 * drawing; else each for itself. What is asked of a time is asked of it through all of a passage.
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
