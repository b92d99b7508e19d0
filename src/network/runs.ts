import { sidesByNode } from '../groups.ts';
import { type Chains, passages, toChains } from './chains.ts';
import type { Draft } from './draft.ts';
import { isEqualDuct } from './equal-ducts.ts';
import type { Reaches } from './reaches.ts';

/**
 * Runs of equal duct: chains of reaches where two strokes of one width and depth meet end to end. Such a seam is no node for
 * corners and bends (rules 3 and 8), so a stroke drawn in two resists as the same stroke drawn in one. Most runs are one
 * reach. Cost: linear in the reaches.
 */
export function toRuns({ chip, nodes, portCount }: Draft, reaches: Reaches): Chains {
  const { reachChannel, rootFrom, rootTo } = reaches;
  const sides = sidesByNode(nodes.size, rootFrom, rootTo);
  return toChains(
    passages(sides, portCount, (a, b) =>
      isEqualDuct(chip.channels[reachChannel[a]], chip.channels[reachChannel[b]]),
    ),
  );
}
