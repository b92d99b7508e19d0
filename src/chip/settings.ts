import { remembered } from '../by-key.ts';
import { isPattern, matches } from '../runsheet/names.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';

/** Finds the run sheet's entry for a channel or port by its drawn name, and remembers which keys never matched. */
export interface SettingsFinder<T> {
  readonly of: (drawnName: string) => T | null;
  /** Whether the name stands in the run sheet in full. Asking counts for nothing in what follows. */
  readonly isNamed: (drawnName: string) => boolean;
  /** Whether a pattern of the run sheet matches the name. */
  readonly isMatched: (drawnName: string) => boolean;
  /** Keys that matched no name asked for, in the order written. */
  readonly unmatched: () => readonly string[];
  /** Patterns that matched names, each of which has an entry that goes before; in the order written. */
  readonly overruled: () => readonly string[];
}

const ONE = { channels: 'channel', ports: 'port' } as const;

/**
 * Exact name first, then the longest pattern as written.
 * @param entries what the sheet has under `section`
 * @throws InputError (from `of`) when two patterns of one length both match
 */
export function settingsFinder<T>(
  sheet: RunSheet | null,
  section: 'channels' | 'ports',
  entries: Readonly<Record<string, T>>,
): SettingsFinder<T> {
  const exact = new Map<string, T>();
  const patterns: { readonly pattern: string; readonly entry: T }[] = [];
  for (const [name, entry] of Object.entries(entries)) {
    if (isPattern(name)) patterns.push({ pattern: name, entry });
    // a drawing may name something with a star: the key that is this very name goes before all others
    exact.set(isPattern(name) ? name : name.trim(), entry);
  }
  patterns.sort((a, b) => b.pattern.length - a.pattern.length);
  const waitingNames = new Set([...exact.keys()].filter((name) => !isPattern(name)));
  const waitingPatterns = new Set(patterns.map(({ pattern }) => pattern));
  const ruling = new Set<string>();
  const known = new Map<string, T | null>();

  const find = (drawnName: string): T | null => {
    // A pattern counts as matched also where an exact name or a longer one takes the thing from it.
    for (const pattern of waitingPatterns) if (matches(pattern, drawnName)) waitingPatterns.delete(pattern);
    waitingNames.delete(drawnName);
    const own = exact.get(drawnName);
    if (own !== undefined) {
      if (isPattern(drawnName)) ruling.add(drawnName);
      return own;
    }
    const first = patterns.findIndex(({ pattern }) => matches(pattern, drawnName));
    if (first < 0) return null;
    const best = patterns[first];
    const isRival = ({ pattern }: (typeof patterns)[number]): boolean =>
      pattern.length === best.pattern.length && matches(pattern, drawnName);
    const rival = patterns.slice(first + 1).find(isRival)?.pattern;
    if (sheet !== null && rival !== undefined) {
      const what = ONE[section];
      refuse(
        sheet,
        [section, rival],
        `${section}: ${quote(best.pattern)} and ${quote(rival)} both match ${what} ${quote(drawnName)} and are equally long; give the ${what} an entry of its own`,
      );
    }
    ruling.add(best.pattern);
    return best.entry;
  };
  const keys = Object.keys(entries);
  return {
    of: (drawnName) => remembered(known, drawnName, () => find(drawnName)),
    isNamed: (drawnName) => exact.has(drawnName),
    isMatched: (drawnName) => patterns.some(({ pattern }) => matches(pattern, drawnName)),
    unmatched: () => keys.filter((key) => waitingPatterns.has(key) || waitingNames.has(key.trim())),
    overruled: () => keys.filter((key) => isPattern(key) && !waitingPatterns.has(key) && !ruling.has(key)),
  };
}
