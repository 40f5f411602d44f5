/** Where rings of one polygon cross themselves or each other. */

type Position = readonly number[];

/**
 * First place where two edges of the rings properly cross (touching at a corner is allowed), and how many crossings there
 * are, counted up to `most`. Edges are swept along the axis in which they are short, so only edges that overlap there are
 * compared. Cost: n log n for outlines as they occur; one so tangled that it would take seconds counts as crossing at its start.
 */
export function findCrossings(rings: readonly (readonly Position[])[], most = 1000): { first: [number, number] | null; count: number } {
  const edges = edgesOf(rings);
  const turned = isWide(edges);
  if (turned) swapAxes(edges);
  const found = sweep(edges, most);
  const [x, y] = found.first ?? [NaN, NaN];
  return turned && found.first !== null ? { ...found, first: [y, x] } : found;
}

/** Pairs of edges looked at before the outline is given up: half a second. */
const mostPairs = 1e8;

function sweep(edges: Float64Array, most: number): { first: [number, number] | null; count: number } {
  let pairs = 0;
  const order = Array.from({ length: edges.length / 4 }, (_, i) => i).sort((a, b) => westOf(edges, a) - westOf(edges, b));
  let active: number[] = [];
  let first: [number, number] | null = null;
  let count = 0;
  for (const edge of order) {
    const west = westOf(edges, edge);
    const [south, north] = [Math.min(edges[edge * 4 + 1]!, edges[edge * 4 + 3]!), Math.max(edges[edge * 4 + 1]!, edges[edge * 4 + 3]!)];
    const still: number[] = [];
    pairs += active.length;
    if (pairs > mostPairs) return { first: first ?? [edges[edge * 4]!, edges[edge * 4 + 1]!], count: most };
    for (const other of active) {
      if (Math.max(edges[other * 4]!, edges[other * 4 + 2]!) < west) continue;
      still.push(other);
      if (Math.max(edges[other * 4 + 1]!, edges[other * 4 + 3]!) < south || Math.min(edges[other * 4 + 1]!, edges[other * 4 + 3]!) > north) continue;
      const place = crossing(edges, edge, other);
      if (place === null) continue;
      first ??= place;
      count++;
      if (count >= most) return { first, count };
    }
    still.push(edge);
    active = still;
  }
  return { first, count };
}

/** Edges are longer in x than in y on the whole. */
function isWide(edges: Float64Array): boolean {
  let [across, down] = [0, 0];
  for (let at = 0; at < edges.length; at += 4) {
    across += Math.abs(edges[at]! - edges[at + 2]!);
    down += Math.abs(edges[at + 1]! - edges[at + 3]!);
  }
  return across > down;
}

function swapAxes(edges: Float64Array): void {
  for (let at = 0; at < edges.length; at += 2) [edges[at], edges[at + 1]] = [edges[at + 1]!, edges[at]!];
}

/** Four numbers an edge: x, y, x, y. */
function edgesOf(rings: readonly (readonly Position[])[]): Float64Array {
  const total = rings.reduce((sum, ring) => sum + Math.max(0, ring.length - 1), 0);
  const edges = new Float64Array(total * 4);
  let at = 0;
  for (const ring of rings) {
    for (let i = 0; i + 1 < ring.length; i++) {
      edges.set([ring[i]![0]!, ring[i]![1]!, ring[i + 1]![0]!, ring[i + 1]![1]!], at);
      at += 4;
    }
  }
  return edges;
}

function westOf(edges: Float64Array, edge: number): number {
  return Math.min(edges[edge * 4]!, edges[edge * 4 + 2]!);
}

/** Crossing point of two edges whose ends lie strictly on both sides of each other, or null. */
function crossing(edges: Float64Array, a: number, b: number): [number, number] | null {
  const [ax, ay, bx, by] = [edges[a * 4]!, edges[a * 4 + 1]!, edges[a * 4 + 2]!, edges[a * 4 + 3]!];
  const [cx, cy, dx, dy] = [edges[b * 4]!, edges[b * 4 + 1]!, edges[b * 4 + 2]!, edges[b * 4 + 3]!];
  const side = (x: number, y: number, fromX: number, fromY: number, toX: number, toY: number): number => (toX - fromX) * (y - fromY) - (toY - fromY) * (x - fromX);
  const c = side(cx, cy, ax, ay, bx, by);
  const d = side(dx, dy, ax, ay, bx, by);
  if (!(c * d < 0)) return null;
  const e = side(ax, ay, cx, cy, dx, dy);
  const f = side(bx, by, cx, cy, dx, dy);
  if (!(e * f < 0)) return null;
  const part = e / (e - f);
  return [ax + part * (bx - ax), ay + part * (by - ay)];
}
