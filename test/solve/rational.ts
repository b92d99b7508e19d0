/** Exact fractions of big integers, and flow networks solved in them: the oracle that does not round. */
export interface Fraction {
  readonly n: bigint;
  readonly d: bigint;
}

export interface ExactEdge {
  readonly from: number;
  readonly to: number;
  readonly resistance: Fraction;
}

/**
 * Pressures and flows of a network by Gauss–Jordan elimination in fractions.
 * @param fixed pressure by node
 * @param injection by node
 */
export function solveExactly(
  nodeCount: number,
  edges: readonly ExactEdge[],
  fixed: ReadonlyMap<number, Fraction>,
  injection: ReadonlyMap<number, Fraction> = new Map(),
): { readonly pressure: readonly Fraction[]; readonly flow: readonly Fraction[] } {
  const matrix = Array.from({ length: nodeCount }, () => new Array<Fraction>(nodeCount + 1).fill(ZERO));
  for (const { from, to, resistance } of edges) {
    const g = divide(ONE, resistance);
    matrix[from][from] = plus(matrix[from][from], g);
    matrix[to][to] = plus(matrix[to][to], g);
    matrix[from][to] = minus(matrix[from][to], g);
    matrix[to][from] = minus(matrix[to][from], g);
  }
  for (let i = 0; i < nodeCount; i++) {
    matrix[i][nodeCount] = injection.get(i) ?? ZERO;
    const p = fixed.get(i);
    if (p === undefined) continue;
    matrix[i].fill(ZERO);
    matrix[i][i] = ONE;
    matrix[i][nodeCount] = p;
  }
  for (let k = 0; k < nodeCount; k++) {
    const at = matrix.findIndex((line, i) => i >= k && line[k].n !== 0n);
    if (at < 0) throw new Error(`singular at node ${k}`);
    [matrix[k], matrix[at]] = [matrix[at], matrix[k]];
    for (let i = 0; i < nodeCount; i++) {
      if (i === k || matrix[i][k].n === 0n) continue;
      const factor = divide(matrix[i][k], matrix[k][k]);
      for (let j = k; j <= nodeCount; j++) {
        if (matrix[k][j].n !== 0n) matrix[i][j] = minus(matrix[i][j], times(factor, matrix[k][j]));
      }
    }
  }
  const pressure = matrix.map((line, i) => divide(line[nodeCount], line[i]));
  const flow = edges.map(({ from, to, resistance }) =>
    divide(minus(pressure[from], pressure[to]), resistance),
  );
  return { pressure, flow };
}

export const ZERO: Fraction = { n: 0n, d: 1n };
export const ONE: Fraction = { n: 1n, d: 1n };

export function fraction(n: number | bigint, d: number | bigint = 1n): Fraction {
  return reduced(BigInt(n), BigInt(d));
}

/** The fraction that a double is. */
export function exactly(value: number): Fraction {
  let scaled = value;
  let d = 1n;
  while (!Number.isInteger(scaled)) {
    scaled *= 2;
    d *= 2n;
  }
  return reduced(BigInt(scaled), d);
}

export function plus(a: Fraction, b: Fraction): Fraction {
  return reduced(a.n * b.d + b.n * a.d, a.d * b.d);
}

export function minus(a: Fraction, b: Fraction): Fraction {
  return reduced(a.n * b.d - b.n * a.d, a.d * b.d);
}

export function times(a: Fraction, b: Fraction): Fraction {
  return reduced(a.n * b.n, a.d * b.d);
}

export function divide(a: Fraction, b: Fraction): Fraction {
  return reduced(a.n * b.d, a.d * b.n);
}

export function toNumber({ n, d }: Fraction): number {
  if (n === 0n) return 0;
  // 80 significant bits before the division, then one rounding of them to 53.
  const sign = n < 0n ? -1 : 1;
  const size = n < 0n ? -n : n;
  const shift = 80 - (size.toString(2).length - d.toString(2).length);
  const quotient = shift >= 0 ? (size << BigInt(shift)) / d : size / (d << BigInt(-shift));
  return sign * Number(quotient) * 2 ** -shift;
}

/** |value − exact| / |exact|, in fractions; 0 when both are nought, Infinity when only the exact one is. */
export function relativeError(value: number, exact: Fraction): number {
  const error = minus(exactly(value), exact);
  if (error.n === 0n) return 0;
  if (exact.n === 0n) return Infinity;
  return Math.abs(toNumber(divide(error, exact)));
}

function reduced(n: bigint, d: bigint): Fraction {
  let a = n < 0n ? -n : n;
  let b = d < 0n ? -d : d;
  while (b > 0n) [a, b] = [b, a % b];
  if (d < 0n) a = -a;
  return { n: n / a, d: d / a };
}
