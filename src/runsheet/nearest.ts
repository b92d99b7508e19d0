import { distance } from 'fastest-levenshtein';
import { quote } from './quote.ts';

/**
 * The candidate that `word` was most likely meant to be, or null when none is near.
 * Near: the same but for case and surrounding space, or at most a third of its characters changed (in a word of more
 * than three, at least two, which is one pair swapped).
 */
export function nearest(word: string, candidates: Iterable<string>): string | null {
  const wanted = plain(word);
  let best: string | null = null;
  let bestDistance = Math.max(wanted.length > 3 ? 2 : 1, Math.floor(wanted.length / 3)) + 1;
  for (const candidate of candidates) {
    const other = plain(candidate);
    if (Math.abs(other.length - wanted.length) >= bestDistance) continue;
    const changed = distance(wanted, other);
    if (changed < bestDistance) {
      best = candidate;
      bestDistance = changed;
    }
  }
  return best;
}

/** The hint at a near miss, `did you mean "lanes"?`; null when none is near. */
export function didYouMean(word: string, candidates: Iterable<string>): string | null {
  const near = nearest(word, candidates);
  return near === null ? null : `did you mean ${quote(near)}?`;
}

function plain(word: string): string {
  return word.slice(0, 200).trim().toLowerCase().replaceAll('_', '-');
}
