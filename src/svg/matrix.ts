import type { Matrix } from './types.ts';

export const IDENTITY: Matrix = [1, 0, 0, 1, 0, 0];

/** The matrix that applies `inner` first: p ↦ outer(inner(p)). */
export function multiply(outer: Matrix, inner: Matrix): Matrix {
  if (inner === IDENTITY) return outer;
  if (outer === IDENTITY) return inner;
  const [a, b, c, d, e, f] = outer;
  const [A, B, C, D, E, F] = inner;
  return [a * A + c * B, b * A + d * B, a * C + c * D, b * C + d * D, a * E + c * F + e, b * E + d * F + f];
}

export function translation(x: number, y: number): Matrix {
  return [1, 0, 0, 1, x, y];
}

/**
 * The two factors by which a matrix stretches (its singular values), larger first; equal for a similarity.
 * With p = (a + d)/2, q = (b − c)/2 (the turning part) and r = (a − d)/2, s = (b + c)/2 (the mirrored part):
 * σ = |p, q| ± |r, s|, free of the cancellation that the eigenvalues of MᵀM suffer.
 */
export function stretches(matrix: Matrix): readonly [number, number] {
  const [a, b, c, d] = matrix;
  const turning = Math.hypot((a + d) / 2, (b - c) / 2);
  const mirrored = Math.hypot((a - d) / 2, (b + c) / 2);
  return [turning + mirrored, Math.abs(turning - mirrored)];
}
