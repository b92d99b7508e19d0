/**
 * Second phase: the numbers of L and D for one set of edge weights.
 * Left-looking by blocks: a block gathers what the earlier blocks with rows among its columns have to add, then is factored by itself.
 *
 * No subtraction anywhere. The matrix is A = Laplacian(weights) + diag(ground) with weights and ground ≥ 0, and each step of elimination is a star-mesh
 * reduction that leaves a matrix of the same kind. So instead of the diagonal we carry each row's sum (the ground):
 *     d_k = ground_k + Σ_i w_ik,   l_ik = w_ik / d_k,   w_ij += l_ik d_k l_jk,   ground_i += l_ik ground_k,
 * with L's entries being −l. Every entry then has a relative error of a few ulp per step of elimination, however far the weights lie apart, where the usual form
 * (diagonal minus products) loses a ground of 1 beside weights of 1e16 altogether. Source of the idea: W. K. Grassmann, M. I. Taksar & D. P. Heyman,
 * Oper. Res. 33 (1985) 1107; C. A. O'Cinneide, Numer. Math. 65 (1993) 109.
 */
import type { Analysis } from './analyse.ts';

export interface Factor {
  readonly analysis: Analysis;
  /** Panels of L without its sign, as laid out by the analysis. */
  readonly entry: Float64Array;
  /** D, by place in the order. */
  readonly pivot: Float64Array;
  readonly workspace: ReturnType<typeof emptyWorkspace>;
}

/** A pivot that is nought, negative or no number: the node hangs on no ground, or a weight is not a finite number ≥ 0. */
export class PivotError extends Error {
  override readonly name = 'PivotError';
  /** Node of the pattern. */
  readonly node: number;
  readonly pivot: number;

  constructor(node: number, pivot: number) {
    super(
      `pivot of node ${node} is ${pivot}; it must be a finite number above 0 (is the node joined to a grounded one?)`,
    );
    this.node = node;
    this.pivot = pivot;
  }
}

/**
 * Factors Laplacian(edgeWeight) + diag(ground).
 * @param edgeWeight one per edge of the pattern, ≥ 0
 * @param ground one per node, ≥ 0; each connected part needs one above 0
 * @param reuse a factor of the same analysis whose memory is overwritten
 * @throws PivotError naming the node
 */
export function factor(
  analysis: Analysis,
  edgeWeight: Float64Array,
  ground: Float64Array,
  reuse?: Factor,
): Factor {
  const result = reuse?.analysis === analysis ? reuse : emptyFactor(analysis);
  const { entry, workspace } = result;
  const { edgeEntry, order, blockCount } = analysis;
  entry.fill(0);
  for (let e = 0; e < edgeEntry.length; e++) if (edgeEntry[e] >= 0) entry[edgeEntry[e]] += edgeWeight[e];
  for (let k = 0; k < order.length; k++) workspace.ground[k] = ground[order[k]];
  workspace.waiting.fill(-1);
  for (let b = 0; b < blockCount; b++) {
    gatherUpdates(result, b);
    factorPanel(result, b);
    waitForNext(result, b, analysis.rowStart[b]);
  }
  return result;
}

function emptyFactor(analysis: Analysis): Factor {
  const { nodeCount, blockCount, panelStart } = analysis;
  return {
    analysis,
    entry: new Float64Array(panelStart[blockCount]),
    pivot: new Float64Array(nodeCount),
    workspace: emptyWorkspace(analysis),
  };
}

function emptyWorkspace({ nodeCount, blockCount, widestBlock }: Analysis) {
  return {
    ground: new Float64Array(nodeCount),
    /** Row of the block at work for each place. */
    rowInPanel: new Int32Array(nodeCount),
    /** Blocks waiting to add to a block, as lists. */
    waiting: new Int32Array(blockCount),
    nextWaiting: new Int32Array(blockCount),
    /** First row of a block that has not been added anywhere yet. */
    pendingRow: new Int32Array(blockCount),
    scaled: new Float64Array(widestBlock * Math.max(4, widestBlock)),
  };
}

/** Adds to block `target` the products of every earlier block that has rows among its columns. */
function gatherUpdates(result: Factor, target: number): void {
  const { analysis, workspace } = result;
  const { firstColumn, rowStart, row } = analysis;
  const { rowInPanel, waiting, nextWaiting, pendingRow } = workspace;
  let source = waiting[target];
  if (source < 0) return;
  const first = firstColumn[target];
  const end = firstColumn[target + 1];
  for (let k = first; k < end; k++) rowInPanel[k] = k - first;
  for (let p = rowStart[target]; p < rowStart[target + 1]; p++)
    rowInPanel[row[p]] = end - first + p - rowStart[target];
  while (source >= 0) {
    const following = nextWaiting[source];
    const from = pendingRow[source];
    const sourceEnd = rowStart[source + 1];
    let to = from + 1;
    while (to < sourceEnd && row[to] < end) to++;
    addProducts(result, source, target, from, to);
    waitForNext(result, source, to);
    source = following;
  }
}

function waitForNext({ analysis, workspace }: Factor, block: number, nextRow: number): void {
  if (nextRow >= analysis.rowStart[block + 1]) return;
  const target = analysis.blockOfColumn[analysis.row[nextRow]];
  workspace.pendingRow[block] = nextRow;
  workspace.nextWaiting[block] = workspace.waiting[target];
  workspace.waiting[target] = block;
}

/**
 * w_ij += Σ_k l_ik d_k l_jk over the columns k of `source`, for its rows j in from … to − 1 (columns of `target`) and all its rows i below j.
 * Four i by two j at a time, so that each number fetched is used more than once. What that writes above the diagonal of the target is never read.
 */
function addProducts(result: Factor, source: number, target: number, from: number, to: number): void {
  const { analysis, entry, pivot, workspace } = result;
  const { firstColumn, rowStart, row, panelStart } = analysis;
  const { rowInPanel, scaled } = workspace;
  const firstK = firstColumn[source];
  const K = firstColumn[source + 1] - firstK;
  const end = rowStart[source + 1];
  // Row p of `row` is at entry[base + p·K …].
  const base = panelStart[source] + (K - rowStart[source]) * K;
  const J = firstColumn[target + 1] - firstColumn[target];
  const targetBase = panelStart[target];
  for (let j = from, s = 0; j < to; j++) {
    for (let k = 0, at = base + j * K; k < K; k++) scaled[s++] = entry[at + k] * pivot[firstK + k];
  }
  let i = from;
  for (; i + 3 < end; i += 4) {
    const r0 = base + i * K;
    const r1 = r0 + K;
    const r2 = r1 + K;
    const r3 = r2 + K;
    const t0 = targetBase + rowInPanel[row[i]] * J;
    const t1 = targetBase + rowInPanel[row[i + 1]] * J;
    const t2 = targetBase + rowInPanel[row[i + 2]] * J;
    const t3 = targetBase + rowInPanel[row[i + 3]] * J;
    const jEnd = Math.min(to, i + 3);
    let j = from;
    let s0 = 0;
    for (; j + 1 < jEnd; j += 2, s0 += 2 * K) {
      const s1 = s0 + K;
      let a00 = 0;
      let a01 = 0;
      let a10 = 0;
      let a11 = 0;
      let a20 = 0;
      let a21 = 0;
      let a30 = 0;
      let a31 = 0;
      for (let k = 0; k < K; k++) {
        const u0 = scaled[s0 + k];
        const u1 = scaled[s1 + k];
        const l0 = entry[r0 + k];
        const l1 = entry[r1 + k];
        const l2 = entry[r2 + k];
        const l3 = entry[r3 + k];
        a00 += l0 * u0;
        a01 += l0 * u1;
        a10 += l1 * u0;
        a11 += l1 * u1;
        a20 += l2 * u0;
        a21 += l2 * u1;
        a30 += l3 * u0;
        a31 += l3 * u1;
      }
      const c0 = rowInPanel[row[j]];
      const c1 = rowInPanel[row[j + 1]];
      entry[t0 + c0] += a00;
      entry[t0 + c1] += a01;
      entry[t1 + c0] += a10;
      entry[t1 + c1] += a11;
      entry[t2 + c0] += a20;
      entry[t2 + c1] += a21;
      entry[t3 + c0] += a30;
      entry[t3 + c1] += a31;
    }
    if (j < jEnd) {
      let a0 = 0;
      let a1 = 0;
      let a2 = 0;
      let a3 = 0;
      for (let k = 0; k < K; k++) {
        const u = scaled[s0 + k];
        a0 += entry[r0 + k] * u;
        a1 += entry[r1 + k] * u;
        a2 += entry[r2 + k] * u;
        a3 += entry[r3 + k] * u;
      }
      const c = rowInPanel[row[j]];
      entry[t0 + c] += a0;
      entry[t1 + c] += a1;
      entry[t2 + c] += a2;
      entry[t3 + c] += a3;
    }
  }
  for (; i < end; i++) {
    const r = base + i * K;
    const t = targetBase + rowInPanel[row[i]] * J;
    const jEnd = Math.min(to, i);
    for (let j = from, s = 0; j < jEnd; j++, s += K) {
      let sum = 0;
      for (let k = 0; k < K; k++) sum += entry[r + k] * scaled[s + k];
      entry[t + rowInPanel[row[j]]] += sum;
    }
  }
}

/** Factors the panel of one block whose outside updates are complete, four columns at a time. */
function factorPanel(result: Factor, block: number): void {
  const { analysis } = result;
  const columns = analysis.firstColumn[block + 1] - analysis.firstColumn[block];
  const length = columns + analysis.rowStart[block + 1] - analysis.rowStart[block];
  for (let k = 0; k < columns; k += 4) {
    const end = Math.min(k + 4, columns);
    if (k > 0) addEarlierColumns(result, block, k, end, length);
    for (let c = k; c < end; c++) eliminateColumn(result, block, c, k, length);
  }
}

/** What the block's own columns before k add to its columns k … end − 1. */
function addEarlierColumns(
  { analysis, entry, pivot, workspace }: Factor,
  block: number,
  k: number,
  end: number,
  length: number,
): void {
  const { scaled } = workspace;
  const first = analysis.firstColumn[block];
  const columns = analysis.firstColumn[block + 1] - first;
  const start = analysis.panelStart[block];
  for (let c = k; c < end; c++) {
    for (let m = 0, at = start + c * columns, s = (c - k) * k; m < k; m++)
      scaled[s + m] = entry[at + m] * pivot[first + m];
  }
  if (end - k < 4) {
    for (let i = k + 1, at = start + i * columns; i < length; i++, at += columns) {
      for (let c = k, s = 0; c < end; c++, s += k) {
        let sum = 0;
        for (let m = 0; m < k; m++) sum += entry[at + m] * scaled[s + m];
        entry[at + c] += sum;
      }
    }
    return;
  }
  const s1 = k;
  const s2 = 2 * k;
  const s3 = 3 * k;
  for (let i = k + 1, at = start + i * columns; i < length; i++, at += columns) {
    let a0 = 0;
    let a1 = 0;
    let a2 = 0;
    let a3 = 0;
    for (let m = 0; m < k; m++) {
      const l = entry[at + m];
      a0 += l * scaled[m];
      a1 += l * scaled[s1 + m];
      a2 += l * scaled[s2 + m];
      a3 += l * scaled[s3 + m];
    }
    entry[at + k] += a0;
    entry[at + k + 1] += a1;
    entry[at + k + 2] += a2;
    entry[at + k + 3] += a3;
  }
}

/** Finishes column c of a block, to which the columns before `done` have been added already. */
function eliminateColumn(result: Factor, block: number, c: number, done: number, length: number): void {
  const { analysis, entry, pivot, workspace } = result;
  const { firstColumn, rowStart, row, panelStart } = analysis;
  const { ground, scaled } = workspace;
  const first = firstColumn[block];
  const columns = firstColumn[block + 1] - first;
  const start = panelStart[block];
  const diagonal = start + c * columns;
  for (let m = done; m < c; m++) scaled[m] = entry[diagonal + m] * pivot[first + m];
  let sum = 0;
  for (let i = c + 1, at = diagonal + columns; i < length; i++, at += columns) {
    let w = entry[at + c];
    for (let m = done; m < c; m++) w += entry[at + m] * scaled[m];
    entry[at + c] = w;
    sum += w;
  }
  const groundC = ground[first + c];
  const d = groundC + sum;
  if (!(d > 0 && d < Infinity)) throw new PivotError(analysis.order[first + c], d);
  pivot[first + c] = d;
  for (let i = c + 1, at = diagonal + columns + c; i < length; i++, at += columns) entry[at] /= d;
  if (groundC === 0) return;
  let at = diagonal + columns + c;
  for (let i = c + 1; i < columns; i++, at += columns) ground[first + i] += entry[at] * groundC;
  for (let p = rowStart[block]; p < rowStart[block + 1]; p++, at += columns)
    ground[row[p]] += entry[at] * groundC;
}
