import type { MultiPolygonXY, XY } from './coordinates.ts';
import { type RowFrame, toAlongAcross } from './rowFrame.ts';

/**
 * Parallel lines through an outline: where rows lie and between which points they run.
 * Metres in the row frame (s across, t along). Scan-line rule: an edge meets line s when
 * min(s1, s2) <= s < max(s1, s2); sorted crossings pair up inside, holes included (even-odd rule).
 */

export type RowAlign = 'centred' | 'left' | 'right';
export type HeadlandKind = 'alongRow' | 'square';

/** One edge of any ring, in the row frame. */
export interface OutlineEdge {
  readonly s1: number;
  readonly t1: number;
  readonly s2: number;
  readonly t2: number;
}

export interface Outline {
  readonly edges: readonly OutlineEdge[];
  readonly minS: number;
  readonly maxS: number;
}

/** Stretch of a row line along t, low end first. */
export type Stretch = readonly [fromT: number, toT: number];

/** Rings as edges in the row frame; the width across the rows is taken over the outer rings. */
export function outlineInFrame(boundaryXY: MultiPolygonXY, frame: RowFrame): Outline {
  const edges: OutlineEdge[] = [];
  let minS = Infinity;
  let maxS = -Infinity;
  for (const polygon of boundaryXY) {
    polygon.forEach((ring, ringIndex) => {
      const placed = openRing(ring).map((point) => toAlongAcross(frame, point));
      placed.forEach((from, i) => {
        const to = placed[(i + 1) % placed.length]!;
        edges.push({ s1: from.s, t1: from.t, s2: to.s, t2: to.t });
        if (ringIndex === 0) {
          minS = Math.min(minS, from.s);
          maxS = Math.max(maxS, from.s);
        }
      });
    });
  }
  return { edges, minS, maxS };
}

export interface LineSpread {
  readonly spacingM: number;
  readonly marginM: number;
  readonly align: RowAlign;
}

/**
 * s of each row line. As many as fit with `marginM` kept on both sides; centred lines share the remainder, so they
 * do not depend on the numbering corner. The 1e-6 keeps a row that fits exactly.
 */
export function lineOffsets(outline: Outline, spread: LineSpread): number[] {
  const { spacingM, marginM, align } = spread;
  const width = outline.maxS - outline.minS;
  const count = width < 2 * marginM ? 0 : Math.floor((width - 2 * marginM) / spacingM + 1e-6) + 1;
  const span = (count - 1) * spacingM;
  const first = {
    centred: outline.minS + (width - span) / 2,
    left: outline.minS + marginM,
    right: outline.maxS - marginM - span,
  }[align];
  return Array.from({ length: count }, (_, i) => first + i * spacingM);
}

export interface Headland {
  readonly widthM: number;
  readonly kind: HeadlandKind;
  /** A piece shorter than this after the set-back is dropped. */
  readonly shortestM: number;
}

/** Pieces of the line at `s` that carry vines, low t first. */
export function rowStretches(outline: Outline, s: number, headland: Headland): Stretch[] {
  const inside = insideStretches(outline.edges, s);
  const setBack = headland.kind === 'alongRow'
    ? inside.map(([from, to]): Stretch => [from + headland.widthM, to - headland.widthM])
    : inside.flatMap((stretch) => keepFromOutline(stretch, outline.edges, { s, widthM: headland.widthM }));
  return setBack.filter(([from, to]) => to > from && to - from >= headland.shortestM);
}

function insideStretches(edges: readonly OutlineEdge[], s: number): Stretch[] {
  const crossings: number[] = [];
  for (const { s1, t1, s2, t2 } of edges) {
    if (Math.min(s1, s2) <= s && s < Math.max(s1, s2)) crossings.push(t1 + ((t2 - t1) * (s - s1)) / (s2 - s1));
  }
  crossings.sort((a, b) => a - b);
  const stretches: Stretch[] = [];
  for (let i = 0; i + 1 < crossings.length; i += 2) stretches.push([crossings[i]!, crossings[i + 1]!]);
  return stretches;
}

/** What is left of a stretch after everything nearer than `widthM` to the outline, measured square to it, is taken out. */
function keepFromOutline(stretch: Stretch, edges: readonly OutlineEdge[], line: { s: number; widthM: number }): Stretch[] {
  let left: Stretch[] = [stretch];
  for (const edge of edges) {
    const taken = nearEdge(edge, line.s, line.widthM);
    if (taken === null) continue;
    left = left.flatMap(([from, to]) => {
      if (taken[1] <= from || taken[0] >= to) return [[from, to] as Stretch];
      const rest: Stretch[] = [];
      if (taken[0] > from) rest.push([from, taken[0]]);
      if (taken[1] < to) rest.push([taken[1], to]);
      return rest;
    });
  }
  return left;
}

/** The stretch of line `s` within `reach` of an edge: a disc at each end and the band between, which together are convex. */
function nearEdge(edge: OutlineEdge, s: number, reach: number): Stretch | null {
  let low = Infinity;
  let high = -Infinity;
  const take = (t: number): void => {
    low = Math.min(low, t);
    high = Math.max(high, t);
  };
  for (const [endS, endT] of [[edge.s1, edge.t1], [edge.s2, edge.t2]] as const) {
    const half = reach * reach - (s - endS) ** 2;
    if (half > 0) {
      take(endT - Math.sqrt(half));
      take(endT + Math.sqrt(half));
    }
  }
  const ds = edge.s2 - edge.s1;
  const dt = edge.t2 - edge.t1;
  const length = Math.hypot(ds, dt);
  if (length > 0) {
    for (const side of [-1, 1]) {
      // the band's long sides, each shifted square to the edge by the reach
      const shiftS = (side * reach * dt) / length;
      const shiftT = (-side * reach * ds) / length;
      const startS = edge.s1 + shiftS;
      if (ds !== 0) {
        const share = (s - startS) / ds;
        if (share >= 0 && share <= 1) take(edge.t1 + shiftT + share * dt);
      }
    }
    if (Math.abs(ds) < 1e-12 && Math.abs(s - edge.s1) < reach) {
      take(edge.t1);
      take(edge.t2);
    }
  }
  return high > low ? [low, high] : null;
}

function openRing(ring: readonly XY[]): readonly XY[] {
  const first = ring[0];
  const last = ring.at(-1);
  const closed = ring.length > 1 && first![0] === last![0] && first![1] === last![1];
  return closed ? ring.slice(0, -1) : ring;
}
