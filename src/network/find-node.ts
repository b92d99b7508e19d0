import { isPattern, matches } from '../runsheet/names.ts';
import { nodeName } from './names.ts';
import type { Network } from './types.ts';

/** Nodes by the name shown: the one named in full, else all that a pattern matches. Cost: linear in nodes. */
export function findNodes(network: Network, name: string): readonly number[] {
  const found: number[] = [];
  for (let node = 0; node < network.nodeCount; node++) {
    const shown = nodeName(network, node);
    if (shown === name) return [node];
    if (isPattern(name) && matches(name, shown)) found.push(node);
  }
  return found;
}
