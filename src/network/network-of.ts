import { dequal } from 'dequal';
import type { Chip } from '../chip/types.ts';
import { buildNetwork } from './build.ts';
import type { Network } from './types.ts';

/**
 * The network of a chip: that of another run of the same layout where the chip is the same to the last number, else joined
 * anew. Cases of a run sheet mostly change only fluid, ports and windows.
 *
 * Cost of the comparison: linear in the drawing.
 */
export function networkOf(chip: Chip, before: Network | undefined): Network {
  return before !== undefined && dequal(before.chip, chip) ? before : buildNetwork(chip);
}
