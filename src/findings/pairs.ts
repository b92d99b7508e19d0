/** One text for two centrelines, whichever comes first. */
export function pairKey(a: number, b: number): string {
  return a < b ? `${a} ${b}` : `${b} ${a}`;
}

/** What there is between each two centrelines, by pairKey. */
export function byPair<T>(
  items: readonly T[],
  aOf: (item: T) => number,
  bOf: (item: T) => number,
): ReadonlyMap<string, readonly T[]> {
  const pairs = new Map<string, T[]>();
  for (const item of items) {
    const key = pairKey(aOf(item), bOf(item));
    const known = pairs.get(key);
    if (known === undefined) pairs.set(key, [item]);
    else known.push(item);
  }
  return pairs;
}
