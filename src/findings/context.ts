import type { Chip, Run } from '../chip/types.ts';
import type { Network } from '../network/types.ts';
import type { FoundSettings } from '../solve/targets.ts';
import type { FlowState } from '../solve/types.ts';

/** Everything that a rule may look at. */
export interface FindingContext {
  /** The network's own chip. */
  readonly chip: Chip;
  readonly network: Network;
  readonly run: Run;
  /** null when nothing was solved: only the rules of the drawing run. */
  readonly flow: FlowState | null;
  /** Settings that were found for ports, at which the chip is then judged; left out where all are given. */
  readonly found?: FoundSettings;
}

/**
 * Makes a fact that several rules need: computed at its first use, once for each context. Two rules that must agree on
 * something (which ends are near misses, say) share such a fact instead of telling each other.
 */
export function oncePerContext<T>(compute: (context: FindingContext) => T): (context: FindingContext) => T {
  const known = new WeakMap<FindingContext, { readonly fact: T }>();
  return (context) => {
    let entry = known.get(context);
    if (entry === undefined) {
      entry = { fact: compute(context) };
      known.set(context, entry);
    }
    return entry.fact;
  };
}
