/** Items by key, keys in order of first appearance. `groupBy([1, 2, 3], (n) => n % 2)` holds 1 → [1, 3] and 0 → [2]. */
export function groupBy<Item, Key>(items: readonly Item[], keyOf: (item: Item) => Key): Map<Key, Item[]> {
  const groups = new Map<Key, Item[]>();
  for (const item of items) {
    const group = groups.get(keyOf(item));
    if (group) group.push(item);
    else groups.set(keyOf(item), [item]);
  }
  return groups;
}
