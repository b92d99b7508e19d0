import type { Run } from '../chip/types.ts';
import type { Network } from '../network/types.ts';

/** A network and how it is run: what analyses, findings and reports have in common. */
export interface RunNetwork {
  readonly network: Network;
  readonly run: Run;
}
