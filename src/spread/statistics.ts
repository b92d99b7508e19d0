/** What a sample says of one number, and of one chance. Sums run in index order with their rounding carried along, so the bytes are the same however the draws were made. */

export interface Summary {
  /** Finite values in the column; the rest do not exist. */
  readonly count: number;
  readonly mean: number;
  /** Of the population, estimated with n − 1. */
  readonly sd: number;
  readonly p2_5: number;
  readonly p97_5: number;
}

/** NaN where there are too few values. */
export function summarise(column: Float64Array): Summary {
  const values = column.filter(Number.isFinite);
  const n = values.length;
  const none = Number.NaN;
  if (n === 0) return { count: 0, mean: none, sd: none, p2_5: none, p97_5: none };
  const mean = compensatedSum(values, (value) => value) / n;
  const square = compensatedSum(values, (value) => (value - mean) ** 2);
  const sd = n < 2 ? none : Math.sqrt(square / (n - 1));
  values.sort();
  return { count: n, mean, sd, p2_5: quantile(values, 0.025), p97_5: quantile(values, 0.975) };
}

/**
 * Quantile of sorted values, the median-unbiased one.
 * Source: R. J. Hyndman & Y. Fan, Am. Stat. 50 (1996) 361, definition 8.
 */
export function quantile(sorted: Float64Array, p: number): number {
  const n = sorted.length;
  if (n === 0) return Number.NaN;
  const place = (n + 1 / 3) * p + 1 / 3;
  const below = Math.floor(place);
  if (below < 1) return sorted[0];
  if (below >= n) return sorted[n - 1];
  return sorted[below - 1] + (place - below) * (sorted[below] - sorted[below - 1]);
}

export interface Chance {
  readonly share: number;
  /** Ends of its 95 % interval. */
  readonly low: number;
  readonly high: number;
}

/**
 * Chance of something that came about `count` times in `of` draws.
 * Source: E. B. Wilson, J. Am. Stat. Assoc. 22 (1927) 209, for independent draws; evenly laid ones are no worse.
 */
export function chanceOf(count: number, of: number): Chance | null {
  if (of === 0) return null;
  const z = 1.959963984540054; // normal quantile of 0.975
  const share = count / of;
  const widening = 1 + (z * z) / of;
  const middle = (share + (z * z) / (2 * of)) / widening;
  const half = (z / widening) * Math.sqrt((share * (1 - share)) / of + (z * z) / (4 * of * of));
  return {
    share,
    low: count === 0 ? 0 : middle - half,
    high: count === of ? 1 : middle + half,
  };
}

/** Neumaier's sum: the rounding of each step is kept and added at the end. */
function compensatedSum(values: Float64Array, term: (value: number) => number): number {
  let sum = 0;
  let lost = 0;
  for (const value of values) {
    const x = term(value);
    const next = sum + x;
    lost += Math.abs(sum) >= Math.abs(x) ? sum - next + x : x - next + sum;
    sum = next;
  }
  return sum + lost;
}
