/** Wilson's 95 % interval of a share (E. B. Wilson, J. Am. Stat. Assoc. 22 (1927) 209). */
export function shareInterval(hits: number, of: number): { readonly low: number; readonly high: number } {
  const z = 1.959964;
  const share = hits / of;
  const middle = share + (z * z) / (2 * of);
  const half = z * Math.sqrt((share * (1 - share)) / of + (z * z) / (4 * of * of));
  const scale = 1 + (z * z) / of;
  return { low: (middle - half) / scale, high: (middle + half) / scale };
}

/** The first `count` of a list in an order that only the seed decides. */
export function seededSample<T>(all: readonly T[], count: number, seed: number): T[] {
  const order = [...all];
  let state = seed >>> 0;
  const random = (): number => {
    // mulberry32, T. Ettinger, public domain
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t = (t + Math.imul(t ^ (t >>> 7), t | 61)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
  const taken = Math.min(count, order.length);
  for (let i = 0; i < taken; i++) {
    const j = i + Math.floor(random() * (order.length - i));
    [order[i], order[j]] = [order[j], order[i]];
  }
  return order.slice(0, taken);
}
