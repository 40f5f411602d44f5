import type { PolygonLonLat } from './coordinates.ts';
import type { AnyRing } from './rings.ts';

/** Where a ring meets itself: the two edges by the number of their first corner, counted from 1. */
export interface RingCrossing {
  readonly ring: number;
  readonly place: readonly [number, number];
  readonly corners: readonly [number, number];
}

/**
 * First place where a ring of the polygon crosses, touches or runs back over itself, or null.
 * Edges are compared in order of their west end, so that a ring of n corners costs about n log n.
 */
export function ringCrossing(rings: PolygonLonLat): RingCrossing | null {
  for (const [ring, corners] of rings.entries()) {
    const found = crossingOf(corners);
    if (found) return { ring, ...found };
  }
  return null;
}

interface Edge {
  readonly at: number;
  readonly from: Point;
  readonly to: Point;
  readonly west: number;
  readonly east: number;
}

type Point = readonly [number, number];

function crossingOf(ring: AnyRing): Omit<RingCrossing, 'ring'> | null {
  const [x0, y0] = ring[0] ?? [0, 0];
  const edges = edgesOf(ring.map(([x, y]): Point => [x - x0, y - y0]));
  const count = edges.length;
  const sorted = [...edges].sort((a, b) => a.west - b.west);
  for (let i = 0; i < sorted.length; i++) {
    const edge = sorted[i]!;
    for (let j = i + 1; j < sorted.length && sorted[j]!.west <= edge.east; j++) {
      const [first, second] = edge.at < sorted[j]!.at ? [edge, sorted[j]!] : [sorted[j]!, edge];
      const place = neighbours(first.at, second.at, count) ? foldBack(first, second, count) : meeting(first, second);
      if (place) return { place: [place[0] + x0, place[1] + y0], corners: [first.at + 1, second.at + 1] };
    }
  }
  return null;
}

function edgesOf(corners: readonly Point[]): Edge[] {
  return corners.slice(0, -1).map((from, at) => {
    const to = corners[at + 1]!;
    return { at, from, to, west: Math.min(from[0], to[0]), east: Math.max(from[0], to[0]) };
  });
}

function neighbours(first: number, second: number, count: number): boolean {
  return second - first === 1 || (first === 0 && second === count - 1);
}

/** Two edges that share a corner may not run back over each other. */
function foldBack(first: Edge, second: Edge, count: number): Point | null {
  const [before, after] = second.at - first.at === 1 || count === 2 ? [first, second] : [second, first];
  const corner = before.to;
  if (turn(before.from, corner, after.to) !== 0) return null;
  const ahead = (before.from[0] - corner[0]) * (after.to[0] - corner[0]) + (before.from[1] - corner[1]) * (after.to[1] - corner[1]);
  return ahead > 0 ? corner : null;
}

/** A point that two edges share, or null. */
function meeting(a: Edge, b: Edge): Point | null {
  const fromSide = turn(a.from, a.to, b.from);
  const toSide = turn(a.from, a.to, b.to);
  const backFrom = turn(b.from, b.to, a.from);
  const backTo = turn(b.from, b.to, a.to);
  if (opposite(fromSide, toSide) && opposite(backFrom, backTo)) {
    const share = backFrom / (backFrom - backTo);
    return [a.from[0] + share * (a.to[0] - a.from[0]), a.from[1] + share * (a.to[1] - a.from[1])];
  }
  if (fromSide === 0 && between(a, b.from)) return b.from;
  if (toSide === 0 && between(a, b.to)) return b.to;
  if (backFrom === 0 && between(b, a.from)) return a.from;
  if (backTo === 0 && between(b, a.to)) return a.to;
  return null;
}

function opposite(one: number, other: number): boolean {
  return (one > 0 && other < 0) || (one < 0 && other > 0);
}

/** Twice the area of the triangle: above 0 when c lies left of the way from a to b. */
function turn(a: Point, b: Point, c: Point): number {
  return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
}

function between(edge: Edge, point: Point): boolean {
  return point[0] >= edge.west && point[0] <= edge.east && point[1] >= Math.min(edge.from[1], edge.to[1]) && point[1] <= Math.max(edge.from[1], edge.to[1]);
}
