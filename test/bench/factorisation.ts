import { spawnSync } from 'node:child_process';
import { performance } from 'node:perf_hooks';
import { all, create, type MathJsInstance } from 'mathjs';
import { analyse } from '../../src/sparse/analyse.ts';
import { factor } from '../../src/sparse/factor.ts';

/** Factorisation of a square lattice's Laplacian (one corner grounded): ours, mathjs' slu, SciPy's SuperLU where it is. */
export function measureFactorisation(): void {
  console.log('\nFactorisation of an n × n lattice of unit conductances, one corner grounded');
  const small = 80;
  const ours = timeOurs(small);
  const theirs = timeMathjs(small);
  console.log(
    `  n = ${small}: ours ${ms(ours.numeric)} (analysis ${ms(ours.symbolic)}), mathjs slu ${ms(theirs)}: ${(ours.numeric / theirs).toFixed(3)} ×, with the analysis ${((ours.numeric + ours.symbolic) / theirs).toFixed(3)} ×`,
  );
  const large = 224;
  const big = timeOurs(large);
  const superLu = timeSuperLu(large);
  console.log(
    superLu === null
      ? `  n = ${large}: ours ${ms(big.numeric)} (analysis ${ms(big.symbolic)}); SciPy is missing`
      : `  n = ${large}: ours ${ms(big.numeric)} (analysis ${ms(big.symbolic)}), SciPy SuperLU with its analysis ${ms(superLu)}: ${((big.numeric + big.symbolic) / superLu).toFixed(2)} ×`,
  );
}

function edges(n: number): { from: Int32Array; to: Int32Array } {
  const from: number[] = [];
  const to: number[] = [];
  for (let y = 0; y < n; y++) {
    for (let x = 0; x < n; x++) {
      if (x + 1 < n) {
        from.push(y * n + x);
        to.push(y * n + x + 1);
      }
      if (y + 1 < n) {
        from.push(y * n + x);
        to.push((y + 1) * n + x);
      }
    }
  }
  return { from: Int32Array.from(from), to: Int32Array.from(to) };
}

function timeOurs(n: number): { symbolic: number; numeric: number } {
  const { from, to } = edges(n);
  const pattern = { nodeCount: n * n, edgeFrom: from, edgeTo: to };
  const conductance = new Float64Array(from.length).fill(1);
  const ground = new Float64Array(n * n);
  ground[0] = 1;
  let symbolic = Number.POSITIVE_INFINITY;
  let numeric = Number.POSITIVE_INFINITY;
  for (let round = 0; round < 5; round++) {
    const t0 = performance.now();
    const analysis = analyse(pattern);
    const t1 = performance.now();
    factor(analysis, conductance, ground);
    const t2 = performance.now();
    symbolic = Math.min(symbolic, t1 - t0);
    numeric = Math.min(numeric, t2 - t1);
  }
  return { symbolic, numeric };
}

function timeMathjs(n: number): number {
  const math = create(all) as MathJsInstance; // create(all) returns the whole instance
  const { from, to } = edges(n);
  const matrix = math.sparse();
  matrix.resize([n * n, n * n]);
  const diagonal = new Float64Array(n * n);
  diagonal[0] = 1;
  for (let e = 0; e < from.length; e++) {
    diagonal[from[e]]++;
    diagonal[to[e]]++;
    matrix.set([from[e], to[e]], -1);
    matrix.set([to[e], from[e]], -1);
  }
  diagonal.forEach((value, i) => {
    matrix.set([i, i], value);
  });
  let best = Number.POSITIVE_INFINITY;
  for (let round = 0; round < 3; round++) {
    const begin = performance.now();
    math.slu(matrix as never, 1, 0.001); // the declarations know slu for matrices of the older type only
    best = Math.min(best, performance.now() - begin);
  }
  return best;
}

const SCIPY = `
import sys, time, numpy as np, scipy.sparse as sp, scipy.sparse.linalg as sl
n = int(sys.argv[1]); i = np.arange(n*n).reshape(n, n)
a = np.r_[i[:, :-1].ravel(), i[:-1].ravel()]; b = np.r_[i[:, 1:].ravel(), i[1:].ravel()]
g = np.ones(len(a)); m = sp.coo_matrix((np.r_[g, g, -g, -g], (np.r_[a, b, a, b], np.r_[a, b, b, a])), shape=(n*n, n*n)).tolil()
m[0, 0] += 1; m = m.tocsc(); best = 1e9
for _ in range(5):
    t = time.perf_counter(); sl.splu(m, permc_spec='MMD_AT_PLUS_A', options=dict(SymmetricMode=True), diag_pivot_thresh=0.0); best = min(best, time.perf_counter() - t)
print(best * 1e3)
`;

function timeSuperLu(n: number): number | null {
  for (const python of ['python3', '/usr/bin/python3']) {
    const { status, stdout } = spawnSync(python, ['-c', SCIPY, String(n)]);
    if (status === 0) return Number(stdout.toString());
  }
  return null;
}

function ms(value: number): string {
  return `${value.toFixed(1)} ms`;
}
