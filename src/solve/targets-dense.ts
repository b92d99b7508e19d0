/**
 * A small dense system A x = b by Gaussian elimination with full pivoting on rows and columns scaled to 1, which also tells the rank.
 * Source: G. H. Golub & C. F. Van Loan, Matrix Computations, ch. 3.4. Cost k³ for k unknowns; meant for k up to a few hundred.
 */

export type DenseFactor =
  | { readonly kind: 'regular'; readonly solve: (b: ArrayLike<number>) => Float64Array }
  /** Rows that add up to nothing: Σ share_i · (row i scaled to 1) = 0. Shares that are not exactly nought are at least NOISE. */
  | { readonly kind: 'dependent'; readonly share: Float64Array };

/**
 * Entries come from solves that balance to 1e-12; below a hundred times that a pivot is noise, and what it would give is magnified
 * ten thousand million times.
 */
const LEAST_PIVOT = 1e-10;
const NOISE = 1e-8;

/** Factors a square matrix given by its rows, which are left as they are. */
export function factorDense(rows: readonly ArrayLike<number>[]): DenseFactor {
  const k = rows.length;
  const rowScale = Float64Array.from(rows, (row) => scaleFor(row));
  const scaled = rows.map((row, i) => Float64Array.from(row, (a) => a * rowScale[i]));
  const columnScale = Float64Array.from({ length: k }, (_, j) => scaleFor(scaled.map((row) => row[j])));
  // U starts as the scaled matrix; combination keeps how each row of U is made of its rows, so that U = combination × scaled.
  const U = scaled.map((row) => row.map((a, j) => a * columnScale[j]));
  const combination = rows.map((_, i) => Float64Array.from({ length: k }, (_, j) => (i === j ? 1 : 0)));
  const column = Int32Array.from({ length: k }, (_, j) => j);
  for (let step = 0; step < k; step++) {
    const [row, place] = largest(U, column, step);
    swap(U, step, row);
    swap(combination, step, row);
    [column[step], column[place]] = [column[place], column[step]];
    const pivot = U[step][column[step]];
    if (!(Math.abs(pivot) > LEAST_PIVOT)) return { kind: 'dependent', share: clear(combination[step]) };
    for (let i = step + 1; i < k; i++) {
      const m = U[i][column[step]] / pivot;
      if (m === 0) continue;
      for (let c = step; c < k; c++) U[i][column[c]] -= m * U[step][column[c]];
      for (let j = 0; j < k; j++) combination[i][j] -= m * combination[step][j];
    }
  }
  return {
    kind: 'regular',
    solve: (b) => {
      const x = new Float64Array(k);
      for (let step = k - 1; step >= 0; step--) {
        let sum = 0;
        for (let j = 0; j < k; j++) sum += combination[step][j] * rowScale[j] * b[j];
        for (let c = step + 1; c < k; c++) sum -= U[step][column[c]] * x[column[c]];
        x[column[step]] = sum / U[step][column[step]];
      }
      return x.map((z, j) => z * columnScale[j]);
    },
  };
}

function scaleFor(values: ArrayLike<number>): number {
  let most = 0;
  for (let j = 0; j < values.length; j++) most = Math.max(most, Math.abs(values[j]));
  return most > 0 ? 1 / most : 1;
}

function largest(U: readonly Float64Array[], column: Int32Array, step: number): readonly [number, number] {
  let at: readonly [number, number] = [step, step];
  let most = -1;
  for (let i = step; i < U.length; i++) {
    for (let c = step; c < U.length; c++) {
      const size = Math.abs(U[i][column[c]]);
      if (size > most) {
        most = size;
        at = [i, c];
      }
    }
  }
  return at;
}

function swap<T>(list: T[], a: number, b: number): void {
  [list[a], list[b]] = [list[b], list[a]];
}

function clear(share: Float64Array): Float64Array {
  const most = share.reduce((found, value) => Math.max(found, Math.abs(value)), 0);
  return share.map((value) => (Math.abs(value) < NOISE * most ? 0 : value));
}
