import { isPattern, matches } from '../runsheet/names.ts';
import { quote } from '../runsheet/quote.ts';
import type { ChannelEntry, RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';

/** Finds the run sheet's entry for a channel by its drawn name, and remembers which keys never matched. */
export interface SettingsFinder {
  readonly of: (drawnName: string) => ChannelEntry | null;
  /** Keys that matched no name asked for, in the order written. */
  readonly unmatched: () => readonly string[];
}

/**
 * Exact name first, then the longest pattern as written.
 * @throws InputError (from `of`) when two patterns of one length both match
 */
export function settingsFinder(sheet: RunSheet | null): SettingsFinder {
  const exact = new Map<string, ChannelEntry>();
  const patterns: { readonly pattern: string; readonly entry: ChannelEntry }[] = [];
  for (const [name, entry] of Object.entries(sheet?.channels ?? {})) {
    if (isPattern(name)) patterns.push({ pattern: name, entry });
    else exact.set(name.trim(), entry);
  }
  patterns.sort((a, b) => b.pattern.length - a.pattern.length);
  const waitingNames = new Set(exact.keys());
  const waitingPatterns = new Set(patterns.map(({ pattern }) => pattern));
  const known = new Map<string, ChannelEntry | null>();

  const find = (drawnName: string): ChannelEntry | null => {
    // A pattern counts as matched also where an exact name or a longer one takes the channel from it.
    for (const pattern of waitingPatterns) if (matches(pattern, drawnName)) waitingPatterns.delete(pattern);
    waitingNames.delete(drawnName);
    const own = exact.get(drawnName);
    if (own !== undefined) return own;
    const first = patterns.findIndex(({ pattern }) => matches(pattern, drawnName));
    if (first < 0) return null;
    const best = patterns[first]!;
    for (let i = first + 1; i < patterns.length && patterns[i]!.pattern.length === best.pattern.length; i++) {
      const rival = patterns[i]!.pattern;
      if (sheet !== null && matches(rival, drawnName)) {
        refuse(
          sheet,
          ['channels', rival],
          `channels: ${quote(best.pattern)} and ${quote(rival)} both match channel ${quote(drawnName)} and are equally long; give the channel an entry of its own`,
        );
      }
    }
    return best.entry;
  };
  return {
    of: (drawnName) => {
      const answer = known.get(drawnName);
      if (answer !== undefined) return answer;
      const found = find(drawnName);
      known.set(drawnName, found);
      return found;
    },
    unmatched: () =>
      Object.keys(sheet?.channels ?? {}).filter(
        (key) => waitingPatterns.has(key) || waitingNames.has(key.trim()),
      ),
  };
}
