/** How names of the run sheet are matched with names of the drawing. */

/** Layer names match without regard to case and surrounding space: two that do have one key. */
export function layerKey(name: string): string {
  return name.trim().toLowerCase();
}

export function isPattern(name: string): boolean {
  return name.includes('*');
}

/**
 * Whether a name matches a pattern in which * stands for any run of characters, also none.
 * Greedy with one point to fall back to: time is at most pattern × name, never exponential.
 */
export function matches(pattern: string, name: string): boolean {
  let p = 0;
  let n = 0;
  let star = -1;
  let resume = 0;
  while (n < name.length) {
    if (pattern[p] === '*') {
      star = p++;
      resume = n;
    } else if (p < pattern.length && pattern[p] === name[n]) {
      p++;
      n++;
    } else if (star >= 0) {
      p = star + 1;
      n = ++resume;
    } else {
      return false;
    }
  }
  while (pattern[p] === '*') p++;
  return p === pattern.length;
}

/**
 * The longest of the patterns that match a name, of equally long ones the first; null when none does. A pattern counts as
 * the name it is written as: what the result matches holds all that a pattern asked for can match.
 */
export function longestMatch(patterns: readonly string[], name: string): string | null {
  let best: string | null = null;
  for (const pattern of patterns)
    if ((best === null || pattern.length > best.length) && matches(pattern, name)) best = pattern;
  return best;
}

/** Names that no run sheet can hold: as keys of an object they would be something else. */
export const UNUSABLE_KEYS: ReadonlySet<string> = new Set(['__proto__', 'constructor', 'prototype']);

/** A record without a prototype: `ports['toString']` is undefined, whatever a drawing calls its ports. */
export function recordOf<T>(entries: Iterable<readonly [string, T]>): Readonly<Record<string, T>> {
  return Object.assign(Object.create(null), Object.fromEntries(entries));
}
