/**
 * Fill-reducing order by approximate minimum degree on a quotient graph.
 * Source: P. R. Amestoy, T. A. Davis & I. S. Duff, SIAM J. Matrix Anal. Appl. 17 (1996) 886: the approximate external degree (eq. 4.1), mass elimination,
 * indistinguishable nodes found by hashing, element absorption and aggressive absorption; nodes of very high degree are set aside and come last.
 * Assumes a symmetric pattern. Ties go to the node that entered its degree list last, so the same graph always gives the same order.
 * Cost: O(edges × nodes) at worst, close to O(edges) on planar graphs; memory 2.2 × pattern + O(nodes).
 *
 * Words of the paper: a *variable* is a node not yet eliminated, an *element* is an eliminated node that stands for the clique of the variables it was
 * joined to (its *boundary*). The list of a variable holds elements first, then variables; the list of an element is its boundary.
 */
import { toGroups } from '../groups.ts';
import type { Adjacency } from './pattern.ts';

/** Order of elimination: result[k] is the node to eliminate k-th. */
export function orderForLittleFill(adjacency: Adjacency): Int32Array {
  const q = quotientGraphOf(adjacency);
  while (q.eliminated < q.nodeCount) {
    const pivot = takeLeastDegree(q);
    formElement(q, pivot);
    measureOverlaps(q, pivot);
    updateBoundary(q, pivot);
    mergeTwins(q, pivot);
    finishElement(q, pivot);
  }
  return sequenceOf(q);
}

// States; a variable is 0.
const ELEMENT = 1;
const DEAD = 2;

type QuotientGraph = ReturnType<typeof emptyGraph>;

function emptyGraph(nodeCount: number, list: Int32Array, listEnd: number, listStart: Int32Array) {
  return {
    nodeCount,
    state: new Uint8Array(nodeCount),
    /** Lists of all nodes, one after another with gaps. */
    list,
    listEnd,
    listStart,
    listLength: new Int32Array(nodeCount),
    /** How many entries at the front of a variable's list are elements. */
    elementCount: new Int32Array(nodeCount),
    /** How many nodes a variable or pivot stands for; negative while it is on the boundary at work, 0 once it is dead. */
    weight: new Int32Array(nodeCount).fill(1),
    /** Variable: bound on its external degree. Element: weight of its boundary. */
    degree: new Int32Array(nodeCount),
    /** Node into which a dead variable went. */
    into: new Int32Array(nodeCount).fill(-1),
    /** Place of each pivot in the order, −1 for others. */
    pivotRank: new Int32Array(nodeCount).fill(-1),
    pivotCount: 0,
    /** Nodes eliminated so far, by weight. */
    eliminated: 0,
    /** Double-linked lists of variables by degree. */
    degreeHead: new Int32Array(nodeCount + 1).fill(-1),
    degreeNext: new Int32Array(nodeCount).fill(-1),
    degreePrevious: new Int32Array(nodeCount).fill(-1),
    leastDegree: 0,
    /** Element e: mark[e] − stamp = weight of its boundary outside the one at work, where mark[e] ≥ stamp. */
    mark: new Int32Array(nodeCount),
    stamp: 1,
    largestBoundary: 0,
    hashHead: new Int32Array(nodeCount).fill(-1),
    hashNext: new Int32Array(nodeCount).fill(-1),
    hashOf: new Int32Array(nodeCount),
    /** Weight of the boundary at work. */
    boundaryWeight: 0,
  };
}

function quotientGraphOf({ start, neighbour }: Adjacency): QuotientGraph {
  const nodeCount = start.length - 1;
  const list = new Int32Array(neighbour.length + (neighbour.length >> 2) + 2 * nodeCount + 1);
  list.set(neighbour);
  const q = emptyGraph(nodeCount, list, neighbour.length, start.slice(0, nodeCount));
  // A node joined to a good part of the graph would make every degree bound near it worthless: it is set aside and comes last.
  const denseDegree = Math.max(16, 10 * Math.sqrt(nodeCount));
  for (let i = nodeCount - 1; i >= 0; i--) {
    const degree = start[i + 1] - start[i];
    q.listLength[i] = degree;
    q.degree[i] = degree;
    if (degree > denseDegree) {
      q.state[i] = DEAD;
      q.weight[i] = 0;
      q.eliminated++;
    } else {
      enterDegreeList(q, i, degree);
    }
  }
  return q;
}

function enterDegreeList(q: QuotientGraph, i: number, degree: number): void {
  const first = q.degreeHead[degree];
  q.degreeNext[i] = first;
  q.degreePrevious[i] = -1;
  if (first >= 0) q.degreePrevious[first] = i;
  q.degreeHead[degree] = i;
  if (degree < q.leastDegree) q.leastDegree = degree;
}

function leaveDegreeList(q: QuotientGraph, i: number): void {
  const next = q.degreeNext[i];
  const previous = q.degreePrevious[i];
  if (next >= 0) q.degreePrevious[next] = previous;
  if (previous >= 0) q.degreeNext[previous] = next;
  else q.degreeHead[q.degree[i]] = next;
}

function takeLeastDegree(q: QuotientGraph): number {
  while (q.degreeHead[q.leastDegree] < 0) q.leastDegree++;
  const pivot = q.degreeHead[q.leastDegree];
  leaveDegreeList(q, pivot);
  q.pivotRank[pivot] = q.pivotCount++;
  q.eliminated += q.weight[pivot];
  return pivot;
}

/** Boundary of the pivot = its variables and those of its elements, which it absorbs. They leave their degree lists; their weight turns negative. */
function formElement(q: QuotientGraph, pivot: number): void {
  // The degree bounds the number of boundary variables, so room made now lasts.
  if (q.listEnd + q.degree[pivot] > q.list.length) closeGaps(q);
  const { list, listStart, listLength, elementCount, weight, state } = q;
  weight[pivot] = -weight[pivot];
  const boundaryStart = q.listEnd;
  let end = boundaryStart;
  let boundaryWeight = 0;
  const pivotStart = listStart[pivot];
  const elements = elementCount[pivot];
  for (let k = 0; k <= elements; k++) {
    // The pivot's own variables come last.
    let p = pivotStart + elements;
    let stop = pivotStart + listLength[pivot];
    if (k < elements) {
      const e = list[pivotStart + k];
      if (state[e] !== ELEMENT) continue;
      p = listStart[e];
      stop = p + listLength[e];
      state[e] = DEAD;
    }
    for (; p < stop; p++) {
      const i = list[p];
      const weightI = weight[i];
      if (weightI <= 0) continue;
      boundaryWeight += weightI;
      weight[i] = -weightI;
      list[end++] = i;
      leaveDegreeList(q, i);
    }
  }
  q.listEnd = end;
  q.boundaryWeight = boundaryWeight;
  state[pivot] = ELEMENT;
  listStart[pivot] = boundaryStart;
  listLength[pivot] = end - boundaryStart;
  elementCount[pivot] = 0;
  q.degree[pivot] = boundaryWeight;
}

/** Moves all live lists to the front, in the order in which they lie. */
function closeGaps(q: QuotientGraph): void {
  const { list, listStart, listLength, state, nodeCount } = q;
  const live: number[] = [];
  for (let i = 0; i < nodeCount; i++) if (state[i] !== DEAD && listLength[i] > 0) live.push(i);
  live.sort((a, b) => listStart[a] - listStart[b]);
  let end = 0;
  for (const i of live) {
    list.copyWithin(end, listStart[i], listStart[i] + listLength[i]);
    listStart[i] = end;
    end += listLength[i];
  }
  q.listEnd = end;
}

/** For every element e that touches the boundary: |boundary of e outside this one|, left in mark (Algorithm 2 of the paper). */
function measureOverlaps(q: QuotientGraph, pivot: number): void {
  // Marks of the last pivot reach up to stamp + largestBoundary.
  q.stamp = freshStamp(q, q.largestBoundary + 1);
  const { list, listStart, listLength, elementCount, weight, mark, degree, stamp, state } = q;
  const start = listStart[pivot];
  const stop = start + listLength[pivot];
  for (let p = start; p < stop; p++) {
    const i = list[p];
    const weightI = -weight[i];
    const from = listStart[i];
    const to = from + elementCount[i];
    for (let k = from; k < to; k++) {
      const e = list[k];
      if (state[e] !== ELEMENT) continue;
      if (mark[e] >= stamp) mark[e] -= weightI;
      else mark[e] = degree[e] + stamp - weightI;
    }
  }
}

function freshStamp(q: QuotientGraph, step: number): number {
  if (q.stamp < 0x7fffffff - step - 2 * q.nodeCount - 2) return q.stamp + step;
  q.mark.fill(0);
  return 1;
}

/** Prunes the list of every boundary variable, bounds its degree, absorbs what the new element covers and sorts variables into hash buckets. */
function updateBoundary(q: QuotientGraph, pivot: number): void {
  const { list, listStart, listLength, elementCount, weight, mark, degree, state, stamp } = q;
  const { into, hashOf, hashHead, hashNext } = q;
  const start = listStart[pivot];
  const stop = start + listLength[pivot];
  for (let p = start; p < stop; p++) {
    const i = list[p];
    const from = listStart[i];
    const elementsEnd = from + elementCount[i];
    const listEnd = from + listLength[i];
    let kept = from;
    let hash = 0;
    let bound = 0;
    for (let k = from; k < elementsEnd; k++) {
      const e = list[k];
      if (state[e] !== ELEMENT) continue;
      const outside = mark[e] - stamp;
      if (outside > 0) {
        bound += outside;
        list[kept++] = e;
        hash += e;
      } else {
        state[e] = DEAD; // aggressive absorption: all its boundary lies in the new one
      }
    }
    const keptElements = kept - from;
    const variablesStart = kept;
    for (let k = elementsEnd; k < listEnd; k++) {
      const j = list[k];
      const weightJ = weight[j];
      if (weightJ <= 0) continue; // dead, or in the new element
      bound += weightJ;
      list[kept++] = j;
      hash += j;
    }
    if (kept === from) {
      // Mass elimination: joined to nothing but the new element.
      const weightI = -weight[i];
      state[i] = DEAD;
      into[i] = pivot;
      weight[i] = 0;
      weight[pivot] -= weightI;
      q.boundaryWeight -= weightI;
      q.eliminated += weightI;
      continue;
    }
    if (bound < degree[i]) degree[i] = bound;
    // One entry at least has gone (the pivot, or an element it absorbed), so there is room for the new element in front.
    list[kept] = list[variablesStart];
    list[variablesStart] = list[from];
    list[from] = pivot;
    elementCount[i] = keptElements + 1;
    listLength[i] = kept - from + 1;
    const bucket = (hash >>> 0) % q.nodeCount;
    hashOf[i] = bucket;
    hashNext[i] = hashHead[bucket];
    hashHead[bucket] = i;
  }
}

/** Variables of the boundary with the same list are one from now on. */
function mergeTwins(q: QuotientGraph, pivot: number): void {
  if (q.boundaryWeight > q.largestBoundary) q.largestBoundary = q.boundaryWeight;
  q.stamp = freshStamp(q, q.largestBoundary + 1);
  const { list, listStart, listLength, elementCount, weight, mark, state } = q;
  const { into, hashOf, hashHead, hashNext } = q;
  const start = listStart[pivot];
  const stop = start + listLength[pivot];
  for (let p = start; p < stop; p++) {
    if (weight[list[p]] >= 0) continue;
    const bucket = hashOf[list[p]];
    let i = hashHead[bucket];
    hashHead[bucket] = -1;
    while (i >= 0 && hashNext[i] >= 0) {
      const length = listLength[i];
      const elements = elementCount[i];
      const from = listStart[i];
      q.stamp = freshStamp(q, 1);
      const stamp = q.stamp;
      for (let k = from + 1; k < from + length; k++) mark[list[k]] = stamp;
      let previous = i;
      let j = hashNext[i];
      while (j >= 0) {
        let same = listLength[j] === length && elementCount[j] === elements;
        const fromJ = listStart[j];
        for (let k = fromJ + 1; same && k < fromJ + length; k++) same = mark[list[k]] === stamp;
        if (same) {
          weight[i] += weight[j]; // both negative
          weight[j] = 0;
          state[j] = DEAD;
          into[j] = i;
          hashNext[previous] = hashNext[j];
        } else {
          previous = j;
        }
        j = hashNext[j];
      }
      i = hashNext[i];
    }
  }
  q.stamp = freshStamp(q, 1);
}

/** Boundary variables go back to the degree lists; the dead ones leave the boundary. */
function finishElement(q: QuotientGraph, pivot: number): void {
  const { list, listStart, listLength, weight, degree, state } = q;
  const start = listStart[pivot];
  const stop = start + listLength[pivot];
  const left = q.nodeCount - q.eliminated;
  let kept = start;
  for (let p = start; p < stop; p++) {
    const i = list[p];
    const weightI = -weight[i];
    if (weightI <= 0) continue;
    weight[i] = weightI;
    const bound = Math.min(degree[i] + q.boundaryWeight - weightI, left - weightI);
    degree[i] = bound;
    enterDegreeList(q, i, bound);
    list[kept++] = i;
  }
  weight[pivot] = 0;
  listLength[pivot] = kept - start;
  degree[pivot] = q.boundaryWeight;
  if (kept === start) state[pivot] = DEAD;
  q.listEnd = kept;
}

/** Pivots in order, each followed by the nodes that went with it; set-aside nodes last, by degree. */
function sequenceOf(q: QuotientGraph): Int32Array {
  const { nodeCount, into, pivotRank, pivotCount, listLength } = q;
  const rank = new Int32Array(nodeCount);
  for (let i = 0; i < nodeCount; i++) {
    let root = i;
    while (into[root] >= 0) root = into[root];
    for (let j = i; j !== root; ) {
      const next = into[j];
      into[j] = root;
      j = next;
    }
    rank[i] = pivotRank[root] < 0 ? pivotCount : pivotRank[root];
  }
  const { first, item: order } = toGroups(pivotCount + 1, rank);
  order.subarray(first[pivotCount]).sort((a, b) => listLength[a] - listLength[b] || a - b);
  return order;
}
