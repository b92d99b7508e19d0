/** Numbers listed by group, as columns: those of group g are member[first[g]] … member[first[g + 1] − 1], rising. */
export interface Groups {
  readonly first: Int32Array;
  readonly member: Int32Array;
}

/** Lists 0 … groupOf.length − 1 by their groups 0 … groupCount − 1; what has a group below 0 is in none. Cost: linear. */
export function byGroup(groupCount: number, groupOf: Int32Array): Groups {
  const first = new Int32Array(groupCount + 1);
  for (const group of groupOf) if (group >= 0) first[group + 1]++;
  for (let g = 0; g < groupCount; g++) first[g + 1] += first[g];
  const next = first.slice();
  const member = new Int32Array(first[groupCount]);
  for (let k = 0; k < groupOf.length; k++) if (groupOf[k] >= 0) member[next[groupOf[k]]++] = k;
  return { first, member };
}

/** Lists the sides of edges by the node that they are at: side 2e is where edge e begins, 2e + 1 where it ends. */
export function sidesByNode(nodeCount: number, edgeFrom: Int32Array, edgeTo: Int32Array): Groups {
  const nodeOf = new Int32Array(2 * edgeFrom.length);
  for (let e = 0; e < edgeFrom.length; e++) {
    nodeOf[2 * e] = edgeFrom[e];
    nodeOf[2 * e + 1] = edgeTo[e];
  }
  return byGroup(nodeCount, nodeOf);
}

/** Items by a key, in the order in which they come. */
export function grouped<Key, Item>(items: Iterable<Item>, keyOf: (item: Item) => Key): Map<Key, Item[]> {
  const groups = new Map<Key, Item[]>();
  for (const item of items) remembered(groups, keyOf(item), () => []).push(item);
  return groups;
}

/** What is known by a key, made when it is first asked for. */
export function remembered<Key, Value>(known: Map<Key, Value>, key: Key, make: () => Value): Value {
  let value = known.get(key);
  if (value === undefined) {
    value = make();
    known.set(key, value);
  }
  return value;
}
