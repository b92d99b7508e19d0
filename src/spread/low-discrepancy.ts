/**
 * A seeded low-discrepancy sequence: Halton's, each digit of each dimension shuffled by a permutation of its own.
 * Sources: J. H. Halton, Numer. Math. 2 (1960) 84; the shuffling and why it keeps the sequence extensible both ways:
 * A. B. Owen, A randomized Halton algorithm in R, arXiv:1706.02808 (2017). Each point is uniform by itself; together they lie more
 * evenly than independent ones, which matters while dimensions are few. The first 32 dimensions are such; in the bases of later ones
 * ten thousand points are no longer even, and they are taken at random (MurmurHash3's mixing of seed, dimension and index).
 * Every number depends on seed, dimension and index alone.
 */

const PRIMES = [
  2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83, 89, 97, 101, 103,
  107, 109, 113, 127, 131,
];

export const EVEN_DIMENSIONS = PRIMES.length;

/** Number strictly between 0 and 1 of one dimension of one draw, both counted from 0. */
export type Uniform = (dimension: number, index: number) => number;

/** @param seed a whole number from 0 to 2⁵³ − 1 */
export function uniformFrom(seed: number): Uniform {
  if (!Number.isSafeInteger(seed) || seed < 0)
    throw new RangeError(`a seed is a whole number from 0 up, not ${seed}`);
  const key = hash(seed % 2 ** 32, Math.floor(seed / 2 ** 32), 0, 0);
  const shuffled: ShuffledDigits[] = [];
  return (dimension, index) => {
    if (dimension >= EVEN_DIMENSIONS) return randomUniform(key, dimension, index);
    shuffled[dimension] ??= shuffleDigits(key, dimension);
    return radicalInverse(shuffled[dimension], index);
  };
}

interface ShuffledDigits {
  readonly base: number;
  readonly digits: number;
  /** Image of digit value v at place k: permutation[k·base + v]. */
  readonly permutation: Uint8Array;
}

/** Digits are carried until a further one is worth less than this. */
const LEAST_DIGIT = 2 ** -44;

function shuffleDigits(key: number, dimension: number): ShuffledDigits {
  const base = PRIMES[dimension];
  const digits = Math.ceil(-Math.log(LEAST_DIGIT) / Math.log(base));
  const permutation = new Uint8Array(digits * base);
  for (let k = 0; k < digits; k++) {
    const start = k * base;
    for (let v = 0; v < base; v++) permutation[start + v] = v;
    // Fisher and Yates
    for (let v = base - 1; v > 0; v--) {
      const other = Math.floor((hash(dimension, k, v, key) / 2 ** 32) * (v + 1));
      const held = permutation[start + v];
      permutation[start + v] = permutation[start + other];
      permutation[start + other] = held;
    }
  }
  return { base, digits, permutation };
}

/** Digits of the index mirrored at the point, leading zeros included; half a last digit keeps it off 0 and 1. */
function radicalInverse({ base, digits, permutation }: ShuffledDigits, index: number): number {
  let rest = index;
  let weight = 1;
  let value = 0;
  for (let k = 0; k < digits; k++) {
    const next = Math.floor(rest / base);
    weight /= base;
    value += permutation[k * base + rest - next * base] * weight;
    rest = next;
  }
  return value + weight / 2;
}

function randomUniform(key: number, dimension: number, index: number): number {
  const high = hash(dimension, index, 0, key);
  const low = hash(dimension, index, 1, key);
  return (high * 2 ** 20 + (low >>> 12) + 0.5) / 2 ** 52;
}

/** MurmurHash3 (A. Appleby, public domain), 32 bits, of three whole 32-bit words. */
function hash(first: number, second: number, third: number, seed: number): number {
  let h = mixed(mixed(mixed(seed, first), second), third);
  h ^= 12; // bytes
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}

function mixed(h: number, word: number): number {
  const k = Math.imul(word, 0xcc9e2d51);
  const x = h ^ Math.imul((k << 15) | (k >>> 17), 0x1b873593);
  return (Math.imul((x << 13) | (x >>> 19), 5) + 0xe6546b64) | 0;
}
