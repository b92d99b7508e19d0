/**
 * First phase: everything about a factorisation P A Pᵀ = L D Lᵀ that depends on the pattern alone.
 * Source: T. A. Davis, ACM Trans. Math. Softw. 31 (2005) 587 (elimination tree and column counts by walking row subtrees); columns of like pattern are
 * gathered into blocks as in E. G. Ng & B. W. Peyton, SIAM J. Sci. Comput. 14 (1993) 1034, and blocks that would be small are joined at the price of some zeros.
 * Cost: the ordering, plus O(|L|) for the counts and O(block rows) for the pattern.
 *
 * A block of c columns with r rows below them is a panel of (c + r) rows × c columns, stored row by row; of its top c × c square only what lies below the
 * diagonal is used.
 */
import { toGroups } from '../groups.ts';
import { orderForLittleFill } from './order.ts';
import { type Adjacency, adjacencyOf, type GraphPattern } from './pattern.ts';

export interface Analysis {
  readonly nodeCount: number;
  /** order[k] is the node eliminated k-th. */
  readonly order: Int32Array;
  readonly blockCount: number;
  /** Block b holds the columns firstColumn[b] … firstColumn[b + 1] − 1 (as places). */
  readonly firstColumn: Int32Array;
  /** Rows below the columns of block b, rising: row[rowStart[b]] … row[rowStart[b + 1] − 1] (as places). */
  readonly rowStart: Int32Array;
  readonly row: Int32Array;
  readonly blockOfColumn: Int32Array;
  /** Where the panel of block b begins among the entries of the factor. Length blockCount + 1. */
  readonly panelStart: Int32Array;
  /** Entry of the factor to which each edge's weight goes, −1 for an edge from a node to itself. */
  readonly edgeEntry: Int32Array;
  /** Entries of L below the diagonal before blocks were joined. */
  readonly fill: number;
  /** For workspaces. */
  readonly widestBlock: number;
}

/** Orders the nodes, builds the elimination tree and lays out the factor. */
export function analyse(pattern: GraphPattern): Analysis {
  const { nodeCount } = pattern;
  const adjacency = adjacencyOf(pattern);
  const byDegree = orderForLittleFill(adjacency);
  const rough = eliminationTree(adjacency, byDegree);
  const tour = postorder(rough);
  const order = tour.map((k) => byDegree[k]);
  const tree = renumbered(rough, tour);

  const firstColumn = blocksOf(tree);
  const blockCount = firstColumn.length - 1;
  const { blockOfColumn, parentBlock } = blockTree(tree.parent, firstColumn);
  const place = inverse(order);
  const { rowStart, row } = blockRows(adjacency, order, place, blockOfColumn, parentBlock, firstColumn);

  const panelStart = new Int32Array(blockCount + 1);
  let widestBlock = 0;
  for (let b = 0; b < blockCount; b++) {
    const columns = firstColumn[b + 1] - firstColumn[b];
    const length = columns + rowStart[b + 1] - rowStart[b];
    const end = panelStart[b] + length * columns;
    if (end > 0x7fffffff)
      throw new RangeError(`factor of ${nodeCount} nodes would hold more than 2^31 entries`);
    panelStart[b + 1] = end;
    widestBlock = Math.max(widestBlock, columns);
  }
  const layout = { firstColumn, rowStart, row, blockOfColumn, panelStart };
  return {
    nodeCount,
    order,
    blockCount,
    ...layout,
    edgeEntry: entriesOf(pattern, place, layout),
    fill: tree.count.reduce((sum, count) => sum + count, 0),
    widestBlock,
  };
}

/** Parent of each column in the elimination tree (−1 for a root) and its number of entries below the diagonal. */
interface Tree {
  readonly parent: Int32Array;
  readonly count: Int32Array;
}

/** Row k of L is the part of the tree between k and its earlier neighbours: walking it finds parents and counts at once. */
function eliminationTree({ start, neighbour }: Adjacency, order: Int32Array): Tree {
  const n = order.length;
  const place = inverse(order);
  const parent = new Int32Array(n).fill(-1);
  const count = new Int32Array(n);
  const seenBy = new Int32Array(n).fill(-1);
  for (let k = 0; k < n; k++) {
    seenBy[k] = k;
    const node = order[k];
    for (let p = start[node]; p < start[node + 1]; p++) {
      let j = place[neighbour[p]];
      if (j > k) continue;
      while (seenBy[j] !== k) {
        if (parent[j] < 0) parent[j] = k;
        count[j]++;
        seenBy[j] = k;
        j = parent[j];
      }
    }
  }
  return { parent, count };
}

/** Children before parents, each subtree in one stretch, the fullest child last so that it can share a block with its parent. */
function postorder({ parent, count }: Tree): Int32Array {
  const n = parent.length;
  const firstChild = new Int32Array(n).fill(-1);
  const nextSibling = new Int32Array(n).fill(-1);
  let firstRoot = -1;
  for (const j of byFallingCount(count)) {
    const up = parent[j];
    if (up < 0) {
      nextSibling[j] = firstRoot;
      firstRoot = j;
    } else {
      nextSibling[j] = firstChild[up];
      firstChild[up] = j;
    }
  }
  const tour = new Int32Array(n);
  let done = 0;
  for (let root = firstRoot; root >= 0; root = nextSibling[root]) {
    let j = root;
    for (;;) {
      while (firstChild[j] >= 0) {
        const child = firstChild[j];
        firstChild[j] = -1;
        j = child;
      }
      tour[done++] = j;
      if (j === root) break;
      j = nextSibling[j] >= 0 ? nextSibling[j] : parent[j];
    }
  }
  return tour;
}

function byFallingCount(count: Int32Array): Int32Array {
  const n = count.length;
  return toGroups(
    n + 1,
    count.map((c) => n - c),
  ).item;
}

function renumbered({ parent, count }: Tree, tour: Int32Array): Tree {
  const place = inverse(tour);
  return {
    parent: tour.map((k) => (parent[k] < 0 ? -1 : place[parent[k]])),
    count: tour.map((k) => count[k]),
  };
}

function inverse(order: Int32Array): Int32Array {
  const place = new Int32Array(order.length);
  for (let k = 0; k < order.length; k++) place[order[k]] = k;
  return place;
}

/** Wider blocks would spend their time in the unblocked inner factorisation. */
const WIDEST_BLOCK = 48;

/**
 * First columns of the blocks. Two neighbouring groups of columns are joined when the left one's parent is in the right one and the zeros that have
 * to be stored for it are few, or the block small: a panel of many columns is cheaper per entry than several of one.
 */
function blocksOf({ parent, count }: Tree): Int32Array {
  const n = parent.length;
  // Group that begins at column j: its end, the height of its panel, and how many zeros that stores. Worked from the right, so that the right neighbour is complete.
  const groupEnd = new Int32Array(n);
  const groupHeight = new Int32Array(n);
  const zeros = new Float64Array(n);
  for (let j = n - 1; j >= 0; j--) {
    groupEnd[j] = j + 1;
    groupHeight[j] = count[j] + 1;
    const right = j + 1;
    if (right >= n || parent[j] < right || parent[j] >= groupEnd[right]) continue;
    const width = groupEnd[right] - j;
    const height = groupHeight[right] + 1;
    const newZeros = zeros[right] + height - 1 - count[j];
    const entries = width * (height - (width + 1) / 2);
    const share = newZeros / entries;
    if (
      newZeros === 0 ||
      width <= 4 ||
      (width <= 16 && share < 0.3) ||
      (width <= 48 && share < 0.1) ||
      share < 0.05
    ) {
      groupEnd[j] = groupEnd[right];
      groupHeight[j] = height;
      zeros[j] = newZeros;
    }
  }
  const first: number[] = [];
  for (let j = 0; j < n; j = groupEnd[j]) {
    const width = groupEnd[j] - j;
    const pieces = Math.ceil(width / WIDEST_BLOCK);
    for (let k = 0; k < pieces; k++) first.push(j + Math.floor((k * width) / pieces));
  }
  first.push(n);
  return Int32Array.from(first);
}

function blockTree(parent: Int32Array, firstColumn: Int32Array) {
  const blockCount = firstColumn.length - 1;
  const blockOfColumn = new Int32Array(parent.length);
  for (let b = 0; b < blockCount; b++) blockOfColumn.fill(b, firstColumn[b], firstColumn[b + 1]);
  const parentBlock = new Int32Array(blockCount).fill(-1);
  for (let b = 0; b < blockCount; b++) {
    const up = parent[firstColumn[b + 1] - 1];
    if (up >= 0) parentBlock[b] = blockOfColumn[up];
  }
  return { blockOfColumn, parentBlock };
}

/** Rows of every block by walking row subtrees block by block; row by row, so that each block's rows come out rising. */
function blockRows(
  { start, neighbour }: Adjacency,
  order: Int32Array,
  place: Int32Array,
  blockOfColumn: Int32Array,
  parentBlock: Int32Array,
  firstColumn: Int32Array,
) {
  const blockCount = firstColumn.length - 1;
  const rowStart = new Int32Array(blockCount + 1);
  const seenBy = new Int32Array(blockCount).fill(-1);
  const walk = (visit: (block: number, k: number) => void) => {
    seenBy.fill(-1);
    for (let k = 0; k < order.length; k++) {
      const own = blockOfColumn[k];
      seenBy[own] = k;
      const node = order[k];
      for (let p = start[node]; p < start[node + 1]; p++) {
        const j = place[neighbour[p]];
        if (j > k) continue;
        for (let b = blockOfColumn[j]; seenBy[b] !== k; b = parentBlock[b]) {
          seenBy[b] = k;
          visit(b, k);
        }
      }
    }
  };
  walk((b) => {
    rowStart[b + 1]++;
  });
  for (let b = 0; b < blockCount; b++) rowStart[b + 1] += rowStart[b];
  const row = new Int32Array(rowStart[blockCount]);
  const cursor = rowStart.slice(0, blockCount);
  walk((b, k) => {
    row[cursor[b]++] = k;
  });
  return { rowStart, row };
}

function entriesOf(
  { edgeFrom, edgeTo }: GraphPattern,
  place: Int32Array,
  layout: Pick<Analysis, 'firstColumn' | 'rowStart' | 'row' | 'blockOfColumn' | 'panelStart'>,
): Int32Array {
  const { firstColumn, rowStart, row, blockOfColumn, panelStart } = layout;
  const entry = new Int32Array(edgeFrom.length).fill(-1);
  for (let e = 0; e < edgeFrom.length; e++) {
    const a = place[edgeFrom[e]];
    const b = place[edgeTo[e]];
    if (a === b) continue;
    const column = Math.min(a, b);
    const target = Math.max(a, b);
    const block = blockOfColumn[column];
    const first = firstColumn[block];
    const columns = firstColumn[block + 1] - first;
    const at =
      target < first + columns
        ? target - first
        : columns + placeIn(row, target, rowStart[block], rowStart[block + 1]) - rowStart[block];
    entry[e] = panelStart[block] + at * columns + (column - first);
  }
  return entry;
}

/** Index of a value known to be in the rising stretch low … high − 1. */
function placeIn(sorted: Int32Array, value: number, low: number, high: number): number {
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (sorted[middle] <= value) low = middle;
    else high = middle;
  }
  return low;
}
