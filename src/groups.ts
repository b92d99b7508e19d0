/** Items by group: those of group g are item[first[g]] … item[first[g + 1] − 1], in ascending order. */
export interface Groups {
  readonly first: Int32Array;
  readonly item: Int32Array;
}

/** Sorts items by their group; an item of group −1 is left out. Cost: linear in items and groups. */
export function toGroups(groupCount: number, groupOf: ArrayLike<number>): Groups {
  const first = firstOfGroups(groupCount, groupOf);
  const fill = first.slice();
  const item = new Int32Array(first[groupCount]);
  for (let i = 0; i < groupOf.length; i++) if (groupOf[i] >= 0) item[fill[groupOf[i]]++] = i;
  return { first, item };
}

/** Where each group begins once items are sorted by group, and at last where the last one ends. */
export function firstOfGroups(groupCount: number, groupOf: ArrayLike<number>): Int32Array {
  const first = new Int32Array(groupCount + 1);
  for (let i = 0; i < groupOf.length; i++) if (groupOf[i] >= 0) first[groupOf[i] + 1]++;
  for (let g = 0; g < groupCount; g++) first[g + 1] += first[g];
  return first;
}

/** The items of one group. */
export function itemsOf({ first, item }: Groups, group: number): Int32Array {
  return item.subarray(first[group], first[group + 1]);
}

/** Lists the sides of edges by the node that they are at: side 2e is where edge e begins, 2e + 1 where it ends. */
export function sidesByNode(nodeCount: number, edgeFrom: Int32Array, edgeTo: Int32Array): Groups {
  const nodeOf = new Int32Array(2 * edgeFrom.length);
  for (let e = 0; e < edgeFrom.length; e++) {
    nodeOf[2 * e] = edgeFrom[e];
    nodeOf[2 * e + 1] = edgeTo[e];
  }
  return toGroups(nodeCount, nodeOf);
}
