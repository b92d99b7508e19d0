/**
 * Third phase: A x = b by L y = Pb, D z = y, Lᵀ(Px) = z.
 * All of L's entries are stored without their minus sign, so both sweeps only add: with b ≥ 0 every x is right to a few ulp by itself, however small beside the others.
 * Cost: two multiplications per entry of L.
 */
import type { Factor } from './factor.ts';

/**
 * Solves for one right-hand side.
 * @param rhs one per node; left as it is
 * @param x where the answer goes; may be `rhs` itself
 */
export function solve(
  { analysis, entry, pivot }: Factor,
  rhs: Float64Array,
  x = new Float64Array(rhs.length),
): Float64Array {
  const { order, blockCount, firstColumn, rowStart, row, panelStart } = analysis;
  const n = order.length;
  const y = new Float64Array(n);
  for (let k = 0; k < n; k++) y[k] = rhs[order[k]];
  for (let b = 0; b < blockCount; b++) {
    const first = firstColumn[b];
    const columns = firstColumn[b + 1] - first;
    let at = panelStart[b] + columns;
    for (let i = 1; i < columns; i++, at += columns) {
      let sum = y[first + i];
      for (let k = 0; k < i; k++) sum += entry[at + k] * y[first + k];
      y[first + i] = sum;
    }
    for (let p = rowStart[b]; p < rowStart[b + 1]; p++, at += columns) {
      let sum = y[row[p]];
      for (let k = 0; k < columns; k++) sum += entry[at + k] * y[first + k];
      y[row[p]] = sum;
    }
  }
  for (let k = 0; k < n; k++) y[k] /= pivot[k];
  for (let b = blockCount - 1; b >= 0; b--) {
    const first = firstColumn[b];
    const columns = firstColumn[b + 1] - first;
    let at = panelStart[b] + columns * columns;
    for (let p = rowStart[b]; p < rowStart[b + 1]; p++, at += columns) {
      const below = y[row[p]];
      for (let k = 0; k < columns; k++) y[first + k] += entry[at + k] * below;
    }
    at = panelStart[b] + (columns - 1) * columns;
    for (let i = columns - 1; i > 0; i--, at -= columns) {
      const below = y[first + i];
      for (let k = 0; k < i; k++) y[first + k] += entry[at + k] * below;
    }
  }
  for (let k = 0; k < n; k++) x[order[k]] = y[k];
  return x;
}
