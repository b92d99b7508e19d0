import { acceptedName, madeUpNames } from '../chip/accept.ts';
import type { Chip, Run } from '../chip/types.ts';
import { UNACCEPTABLE_RULES } from '../runsheet/measures.ts';
import { isPattern } from '../runsheet/names.ts';

/** What must be kept; null where nothing is asked. */
export interface KeptLimits {
  readonly min: number | null;
  readonly max: number | null;
}

/** What an `accept` entry is read from. */
export interface AcceptingRun {
  readonly network: { readonly chip: Pick<Chip, 'channels' | 'ports'> };
  readonly run: Pick<Run, 'accept'>;
}

const NO_NAMES: ReadonlySet<string> = new Set();

/**
 * Limits of a rule at these names, moved out as far as the run sheet's `accept` takes it on; an entry without `up_to` lifts them.
 * So a chip whose verdict is ready is judged by the same limits in every draw.
 * @param unit SI unit of the limits, as findings write it
 */
export function acceptedLimits(
  { network: { chip }, run }: AcceptingRun,
  rule: string,
  names: readonly string[],
  unit: string,
  min: number | null,
  max: number | null,
): KeptLimits {
  let [low, high] = [min, max];
  if (UNACCEPTABLE_RULES.has(rule)) return { min: low, max: high };
  const entries = run.accept.filter((entry) => entry.rule === rule);
  const madeUp = entries.some(({ at }) => isPattern(at)) ? madeUpNames(chip) : NO_NAMES;
  for (const entry of entries) {
    if (acceptedName(entry.at, names, madeUp) === null) continue;
    if (entry.upTo === null) return { min: null, max: null };
    if (entry.upToUnit !== undefined && entry.upToUnit !== unit) continue;
    // the value lies below a least or above a most; one entry can move only the side it lies beyond
    if (low !== null && entry.upTo < low) low = entry.upTo;
    else if (high !== null && entry.upTo > high) high = entry.upTo;
  }
  return { min: low, max: high };
}
