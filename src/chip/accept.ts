import { isPattern, matches } from '../runsheet/names.ts';
import type { Chip } from './types.ts';

/**
 * The first of a finding's names that an `accept` entry means: the one it names in full, else one that its pattern matches; null
 * when it means none.
 * @param madeUp names that a pattern can't mean, with all their reaches
 */
export function acceptedName(
  at: string,
  names: readonly string[],
  madeUp: ReadonlySet<string>,
): string | null {
  if (names.includes(at)) return at;
  if (!isPattern(at)) return null;
  return names.find((name) => matches(at, name) && !madeUp.has(name) && !madeUp.has(channelOf(name))) ?? null;
}

/** Names shown for channels and ports that the drawing does not name so: they change when it does. */
export function madeUpNames({ channels, ports }: Pick<Chip, 'channels' | 'ports'>): ReadonlySet<string> {
  const before = known.get(channels);
  if (before !== undefined) return before;
  const madeUp = new Set<string>();
  for (const { name, drawnName } of [...channels, ...ports]) if (name !== drawnName) madeUp.add(name);
  known.set(channels, madeUp);
  return madeUp;
}

/** By a chip's list of channels, for a chip with as many entries as reaches asks as often. */
const known = new WeakMap<Chip['channels'], ReadonlySet<string>>();

/** A reach of a channel of several is named for it: `lane:2`. */
function channelOf(name: string): string {
  return name.replace(/:\d+$/, '');
}
