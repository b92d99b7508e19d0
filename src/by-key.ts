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
