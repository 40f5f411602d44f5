/** One passage along an edge: its index, and the node it leads to. */
export interface Passage {
  readonly edge: number;
  readonly from: number;
  readonly to: number;
}

/**
 * A walk from `start` that uses each edge as often as `copies` says (Hierholzer 1873). The edges must be connected and
 * have even degrees, or odd ones at `start` and one other node, where the walk then ends.
 */
export function eulerWalk(edges: readonly { readonly a: number; readonly b: number }[], copies: Uint8Array, start: number): Passage[] {
  const left = Uint8Array.from(copies);
  const edgesAt = new Map<number, number[]>();
  edges.forEach(({ a, b }, edge) => {
    if (copies[edge] === 0) return;
    for (const node of [a, b]) edgesAt.set(node, [...(edgesAt.get(node) ?? []), edge]);
  });
  const trail: { node: number; by: Passage | null }[] = [{ node: start, by: null }];
  const walk: Passage[] = [];
  while (trail.length > 0) {
    const { node, by } = trail.at(-1)!;
    const edge = edgesAt.get(node)?.find((candidate) => left[candidate]! > 0);
    if (edge === undefined) {
      trail.pop();
      if (by !== null) walk.push(by);
      continue;
    }
    left[edge]! -= 1;
    const to = edges[edge]!.a === node ? edges[edge]!.b : edges[edge]!.a;
    trail.push({ node: to, by: { edge, from: node, to } });
  }
  return walk.reverse();
}
