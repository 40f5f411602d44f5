/**
 * Borders cut by the block's outline, and the outline cut by the borders: the pieces between all crossings, each shared by
 * what lies on its two sides. In: borders and outline rings in local metres (y to the north). Out: pieces that lie in the
 * block or on its outline. Cost: border and outline pieces that share a strip of ground.
 * A border point that lies exactly on an outline edge counts as left of it, so crossings always come in matching numbers.
 */
import type { XY } from '../geo/coordinates.ts';

/** A line between two nodes. Walking along it, `left` and `right` are the zones beside it; null outside the block or unknown. */
export interface Piece {
  readonly points: readonly XY[];
  readonly from: string;
  readonly to: string;
  readonly left: number | null;
  readonly right: number | null;
  readonly isOutline: boolean;
}

export interface MetricBorder {
  readonly left: number;
  readonly right: number;
  /** A loop repeats its first point at the end. */
  readonly points: readonly XY[];
  readonly isLoop: boolean;
}

interface Crossing {
  readonly node: string;
  readonly point: XY;
  /** Segment number plus the part of it, along the border and along the outline ring. */
  readonly alongBorder: number;
  readonly alongRing: number;
}

/** Rings closed, the block to their left. `stripM` is the width of the strips that crossings are looked up in. */
export function cutByOutline(borders: readonly MetricBorder[], ringsXY: readonly (readonly XY[])[], stripM: number): Piece[] {
  const outline = new Outline(ringsXY, stripM);
  const onRing: Crossing[][] = ringsXY.map(() => []);
  const pieces = borders.flatMap((border, index) => {
    const crossings = outline.crossings(border.points, (ring, crossing) => onRing[ring]!.push(crossing), `b${index}`);
    return cutBorder(border, crossings, outline);
  });
  return [...pieces, ...ringsXY.flatMap((ring, index) => cutRing(ring, onRing[index]!))];
}

function cutBorder(border: MetricBorder, crossings: Crossing[], outline: Outline): Piece[] {
  const { points, isLoop, left, right } = border;
  const stretches = stretchesOf(points, crossings, isLoop);
  return stretches.filter(({ points: line }) => outline.holds(middleOf(line))).map((stretch) => ({ ...stretch, left, right, isOutline: false }));
}

function cutRing(ring: readonly XY[], crossings: readonly Crossing[]): Piece[] {
  const along = crossings.map((crossing) => ({ ...crossing, alongBorder: crossing.alongRing }));
  return stretchesOf(ring, along, true).map((stretch) => ({ ...stretch, left: null, right: null, isOutline: true }));
}

interface Stretch {
  readonly points: readonly XY[];
  readonly from: string;
  readonly to: string;
}

/** The line between consecutive crossings; on a loop the first and the last stretch are one. */
function stretchesOf(points: readonly XY[], unordered: readonly Crossing[], isLoop: boolean): Stretch[] {
  const crossings = [...unordered].sort((a, b) => a.alongBorder - b.alongBorder);
  const nodeAt = (point: XY) => `${point[0]} ${point[1]}`;
  const first = crossings[0];
  const last = crossings[crossings.length - 1];
  if (first === undefined || last === undefined) return [{ points, from: nodeAt(points[0]!), to: nodeAt(points[points.length - 1]!) }];
  const between = crossings.slice(1).map((next, index): Stretch => {
    const previous = crossings[index]!;
    const inner = points.slice(Math.floor(previous.alongBorder) + 1, Math.floor(next.alongBorder) + 1);
    return { points: [previous.point, ...inner, next.point], from: previous.node, to: next.node };
  });
  const head = points.slice(0, Math.floor(first.alongBorder) + 1);
  const tail = points.slice(Math.floor(last.alongBorder) + 1);
  if (isLoop) return [...between, { points: [last.point, ...tail, ...head.slice(1), first.point], from: last.node, to: first.node }];
  return [
    { points: [...head, first.point], from: nodeAt(points[0]!), to: first.node },
    ...between,
    { points: [last.point, ...tail], from: last.node, to: nodeAt(points[points.length - 1]!) },
  ];
}

/** Middle of the longest segment: as far from the ends, which lie on the outline, as the line allows. */
function middleOf(points: readonly XY[]): XY {
  let best: XY = points[0]!;
  let longest = -1;
  for (let at = 0; at + 1 < points.length; at++) {
    const [ax, ay] = points[at]!;
    const [bx, by] = points[at + 1]!;
    const length = (bx - ax) ** 2 + (by - ay) ** 2;
    if (length > longest) {
      longest = length;
      best = [(ax + bx) / 2, (ay + by) / 2];
    }
  }
  return best;
}

/** Twice the area of the triangle a, b, c; not negative for c left of the line from a to b. */
function turn(a: XY, b: XY, c: XY): number {
  return (b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1]);
}

interface OutlineSegment {
  readonly ring: number;
  readonly segment: number;
  readonly p: XY;
  readonly q: XY;
}

/** Outline segments by the strips of y they pass. */
class Outline {
  private readonly segments: OutlineSegment[];
  private readonly strips = new Map<number, number[]>();
  private readonly stripM: number;
  /** Number of the last line segment that each outline segment was tried with: it may lie in several strips. */
  private readonly triedWith: Int32Array;
  private tries = 0;

  constructor(rings: readonly (readonly XY[])[], stripM: number) {
    this.stripM = stripM;
    this.segments = rings.flatMap((points, ring) => points.slice(1).map((q, segment) => ({ ring, segment, p: points[segment]!, q })));
    this.triedWith = new Int32Array(this.segments.length);
    this.segments.forEach(({ p, q }, at) => {
      for (let strip = this.stripOf(Math.min(p[1], q[1])); strip <= this.stripOf(Math.max(p[1], q[1])); strip++) {
        const list = this.strips.get(strip);
        if (list === undefined) this.strips.set(strip, [at]);
        else list.push(at);
      }
    });
  }

  crossings(line: readonly XY[], note: (ring: number, crossing: Crossing) => void, name: string): Crossing[] {
    const found: Crossing[] = [];
    for (let at = 0; at + 1 < line.length; at++) {
      const [a, b] = [line[at]!, line[at + 1]!];
      this.tries++;
      for (let strip = this.stripOf(Math.min(a[1], b[1])); strip <= this.stripOf(Math.max(a[1], b[1])); strip++) {
        for (const index of this.strips.get(strip) ?? []) {
          if (this.triedWith[index] === this.tries) continue;
          this.triedWith[index] = this.tries;
          const outlineSegment = this.segments[index]!;
          const parts = crossingParts([a, b], outlineSegment);
          if (parts === null) continue;
          const { ring, segment, p, q } = outlineSegment;
          const point: XY = [p[0] + parts[1] * (q[0] - p[0]), p[1] + parts[1] * (q[1] - p[1])];
          const crossing = { node: `${name} ${at} ${index}`, point, alongBorder: at + below1(parts[0]), alongRing: segment + below1(parts[1]) };
          found.push(crossing);
          note(ring, crossing);
        }
      }
    }
    return found;
  }

  /** Even–odd rule along a ray to the east. */
  holds([x, y]: XY): boolean {
    let isInside = false;
    for (const index of this.strips.get(this.stripOf(y)) ?? []) {
      const { p, q } = this.segments[index]!;
      if (p[1] > y !== q[1] > y && x < p[0] + ((y - p[1]) / (q[1] - p[1])) * (q[0] - p[0])) isInside = !isInside;
    }
    return isInside;
  }

  private stripOf(y: number): number {
    return Math.floor(y / this.stripM);
  }
}

/** Where two segments cross, as parts of the first and the second; null when they do not. */
function crossingParts([a, b]: readonly [XY, XY], { p, q }: OutlineSegment): readonly [number, number] | null {
  const sideA = turn(p, q, a);
  const sideB = turn(p, q, b);
  if (sideA >= 0 === sideB >= 0) return null;
  const sideP = turn(a, b, p);
  const sideQ = turn(a, b, q);
  if (sideP >= 0 === sideQ >= 0) return null;
  return [sideA / (sideA - sideB), sideP / (sideP - sideQ)];
}

/** Keeps the segment number of a crossing at the very end of its segment. */
function below1(part: number): number {
  return Math.min(part, 1 - 2 ** -30);
}
