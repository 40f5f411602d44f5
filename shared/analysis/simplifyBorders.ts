/**
 * Straightens borders, each once, so that the two zones of a border keep exactly the same line.
 * Points leave in the order of the triangle they form with their neighbours, smallest first (Visvalingam & Whyatt 1993),
 * and only when no other point of any border lies in that triangle: then no two borders can come to touch or cross.
 * In and out: borders in half-cell units; all tests are exact, in whole numbers. Ends of borders stay. Cost: linear in the
 * points, plus the half-cells in the triangles removed.
 */
import type { Border } from './polygoniseTrace.ts';

export interface SimplifyOptions {
  /** Triangles up to this area, in cells, are given up; 0 leaves only points on straight lines out. */
  readonly areaCells: number;
  /** Extent of the network in half-cells. */
  readonly width: number;
  readonly height: number;
}

/** A staircase of 1-cell steps is one straight line afterwards; a loop keeps at least four points. */
export function simplifyBorders(borders: readonly Border[], options: SimplifyOptions): Border[] {
  const network = new Network(borders, options.width, options.height);
  network.removeUpTo(Math.floor(options.areaCells * 8));
  return borders.map((border, index) => ({ ...border, points: network.pointsOf(index) }));
}

/** All points of all borders as linked lists in one numbering, and how many lie at each half-cell position. */
class Network {
  private readonly u: Int32Array;
  private readonly v: Int32Array;
  private readonly before: Int32Array;
  private readonly after: Int32Array;
  private readonly borderOf: Int32Array;
  private readonly first: Int32Array;
  private readonly left: Int32Array;
  private readonly isLoop: Uint8Array;
  private readonly startNode: Int32Array;
  private readonly endNode: Int32Array;
  private readonly occupied: Uint8Array;
  private readonly width: number;
  private readonly span = new Float64Array(2);
  /** Borders between the same two nodes that have no point left between: at most one may be straight. */
  private readonly straight = new Set<number>();

  constructor(borders: readonly Border[], width: number, height: number) {
    const total = borders.reduce((sum, { points }) => sum + points.length / 2, 0);
    const make = () => new Int32Array(total);
    [this.u, this.v, this.before, this.after, this.borderOf] = [make(), make(), make(), make(), make()];
    this.first = new Int32Array(borders.length);
    this.left = new Int32Array(borders.length);
    this.startNode = Int32Array.from(borders, ({ points }) => points[1]! * width + points[0]!);
    this.endNode = Int32Array.from(borders, ({ points }) => points[points.length - 1]! * width + points[points.length - 2]!);
    this.isLoop = new Uint8Array(borders.length);
    this.occupied = new Uint8Array(width * height);
    this.width = width;
    let point = 0;
    borders.forEach(({ points, isLoop }, border) => {
      const count = points.length / 2;
      this.first[border] = point;
      this.left[border] = count;
      this.isLoop[border] = isLoop ? 1 : 0;
      for (let at = 0; at < count; at++, point++) {
        this.u[point] = points[2 * at]!;
        this.v[point] = points[2 * at + 1]!;
        this.borderOf[point] = border;
        this.before[point] = at > 0 ? point - 1 : isLoop ? point + count - 1 : -1;
        this.after[point] = at < count - 1 ? point + 1 : isLoop ? point - count + 1 : -1;
        this.occupied[this.v[point]! * width + this.u[point]!] = 1;
      }
    });
  }

  /** Twice the triangle in half-cells is a whole number, so points wait in one queue per size. */
  removeUpTo(limit: number): void {
    const queues: number[][] = Array.from({ length: limit + 1 }, () => []);
    const enqueue = (point: number) => {
      const size = this.twiceArea(point);
      if (size <= limit) queues[size]!.push(point);
      return size;
    };
    for (let point = 0; point < this.u.length; point++) enqueue(point);
    const served = new Int32Array(limit + 1);
    for (let size = 0; size <= limit; ) {
      const point = queues[size]![served[size]!];
      if (point === undefined) {
        size++;
        continue;
      }
      served[size]!++;
      if (this.twiceArea(point) !== size || !this.mayRemove(point)) continue;
      const [previous, next] = this.remove(point);
      size = Math.min(size, enqueue(previous), enqueue(next));
    }
  }

  pointsOf(border: number): Int32Array {
    const points = new Int32Array(2 * this.left[border]!);
    let point = this.first[border]!;
    for (let at = 0; at < points.length; at += 2, point = this.after[point]!) {
      points[at] = this.u[point]!;
      points[at + 1] = this.v[point]!;
    }
    return points;
  }

  /** Infinite for the ends of borders and for points already removed. */
  private twiceArea(point: number): number {
    const previous = this.before[point]!;
    const next = this.after[point]!;
    if (previous < 0 || next < 0) return Infinity;
    return Math.abs(this.cross(previous, point, next));
  }

  private cross(a: number, b: number, c: number): number {
    return (this.u[b]! - this.u[a]!) * (this.v[c]! - this.v[a]!) - (this.u[c]! - this.u[a]!) * (this.v[b]! - this.v[a]!);
  }

  private mayRemove(point: number): boolean {
    return this.isSpare(point) && (this.twiceArea(point) === 0 || this.isTriangleEmpty(this.before[point]!, point, this.after[point]!));
  }

  /** A ring keeps four points; a border from node to node may lose all between unless another already joins them straight. */
  private isSpare(point: number): boolean {
    const border = this.borderOf[point]!;
    const count = this.left[border]!;
    if (this.isLoop[border] === 1) return count > 4;
    if (this.startNode[border] === this.endNode[border]) return count > 5;
    return count > 3 || !this.straight.has(this.nodePair(border));
  }

  private nodePair(border: number): number {
    const [start, end] = [this.startNode[border]!, this.endNode[border]!];
    return Math.min(start, end) * this.occupied.length + Math.max(start, end);
  }

  private remove(point: number): readonly [previous: number, next: number] {
    const previous = this.before[point]!;
    const next = this.after[point]!;
    const border = this.borderOf[point]!;
    this.left[border]!--;
    if (this.isLoop[border] === 0 && this.left[border] === 2) this.straight.add(this.nodePair(border));
    this.occupied[this.v[point]! * this.width + this.u[point]!] = 0;
    this.after[previous] = next;
    this.before[next] = previous;
    this.before[point] = -1;
    this.after[point] = -1;
    if (this.first[border] === point) this.first[border] = next;
    return [previous, next];
  }

  /** No point of any border in the closed triangle, its own corners aside; walked row by row. */
  private isTriangleEmpty(a: number, b: number, c: number): boolean {
    const { u, v, span } = this;
    const top = Math.min(v[a]!, v[b]!, v[c]!);
    const bottom = Math.max(v[a]!, v[b]!, v[c]!);
    for (let row = top; row <= bottom; row++) {
      span[0] = Infinity;
      span[1] = -Infinity;
      this.widenSpan(row, a, b);
      this.widenSpan(row, b, c);
      this.widenSpan(row, c, a);
      // A hair of slack against rounding; a point just outside may then forbid a removal, which does no harm.
      const to = span[1]! + 1e-9;
      for (let col = Math.ceil(span[0]! - 1e-9); col <= to; col++) {
        if (this.occupied[row * this.width + col] === 0) continue;
        const isCorner = (col === u[a] && row === v[a]) || (col === u[b] && row === v[b]) || (col === u[c] && row === v[c]);
        if (!isCorner) return false;
      }
    }
    return true;
  }

  /** Widens the stretch of a row that the triangle covers by where its side from p to q passes. */
  private widenSpan(row: number, p: number, q: number): void {
    const { u, v, span } = this;
    const down = v[q]! - v[p]!;
    if ((row < v[p]! && row < v[q]!) || (row > v[p]! && row > v[q]!)) return;
    const at = down === 0 ? u[p]! : u[p]! + ((row - v[p]!) * (u[q]! - u[p]!)) / down;
    const other = down === 0 ? u[q]! : at;
    span[0] = Math.min(span[0]!, at, other);
    span[1] = Math.max(span[1]!, at, other);
  }
}
