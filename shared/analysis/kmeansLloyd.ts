/**
 * One k-means run from given centres to a fixed point: Lloyd's iteration (Lloyd 1982) with the triangle-inequality
 * bounds of Hamerly 2010 ("Making k-means even faster"): a point whose bound on its own centre is below half the gap to
 * the next centre, or below its bound on all others, cannot change and costs no distance. Same result as plain Lloyd.
 * A zone left without points takes the point farthest from its centre (common practice).
 */

import type { PointTable } from './kmeansPoints.ts';

export interface KMeansRun {
  /** k × dimensions, row after row. */
  readonly centres: Float64Array;
  readonly labels: Uint8Array;
  /** Sum of squared distances to the own centre. */
  readonly inertia: number;
  readonly iterations: number;
  readonly converged: boolean;
}

/** Moves `start` (k centres) until no point changes zone or `maxIterations` is reached. */
export function refineCentres(points: PointTable, start: Float64Array, maxIterations = 300): KMeansRun {
  const run = new LloydRun(points, start);
  run.assignAll();
  let iterations = 0;
  let converged = false;
  while (!converged && iterations < maxIterations) {
    iterations++;
    if (run.moveCentres()) {
      run.assignAll();
      continue;
    }
    converged = run.reassign() === 0;
  }
  return { centres: run.centres, labels: run.labels, inertia: run.inertia(), iterations, converged };
}

class LloydRun {
  readonly centres: Float64Array;
  readonly labels: Uint8Array;
  private readonly k: number;
  private readonly points: PointTable;
  /** Bound from above on the distance to the own centre, from below on the distance to any other. */
  private readonly upper: Float64Array;
  private readonly lower: Float64Array;
  private readonly sums: Float64Array;
  private readonly sizes: Float64Array;
  private readonly moved: Float64Array;
  private readonly halfGap: Float64Array;

  constructor(points: PointTable, start: Float64Array) {
    this.points = points;
    this.k = start.length / points.dimensions;
    this.centres = start.slice();
    this.labels = new Uint8Array(points.count);
    this.upper = new Float64Array(points.count);
    this.lower = new Float64Array(points.count);
    this.sums = new Float64Array(start.length);
    this.sizes = new Float64Array(this.k);
    this.moved = new Float64Array(this.k);
    this.halfGap = new Float64Array(this.k);
  }

  /** Gives every point its nearest centre from scratch and sets sums, sizes and bounds. */
  assignAll(): void {
    this.sums.fill(0);
    this.sizes.fill(0);
    for (let point = 0; point < this.points.count; point++) {
      this.findNearest(point);
      this.account(point, this.labels[point]!, 1);
    }
  }

  /** Centres become the means of their points; true when an empty zone had to be given a point. */
  moveCentres(): boolean {
    const { dimensions } = this.points;
    let repaired = false;
    for (let zone = 0; zone < this.k; zone++) {
      if (this.sizes[zone] === 0) {
        repaired = this.repairEmpty(zone) || repaired;
        continue;
      }
      let shift = 0;
      for (let f = zone * dimensions; f < (zone + 1) * dimensions; f++) {
        const mean = this.sums[f]! / this.sizes[zone]!;
        shift += (mean - this.centres[f]!) ** 2;
        this.centres[f] = mean;
      }
      this.moved[zone] = Math.sqrt(shift);
    }
    return repaired;
  }

  /** Loosens the bounds by the centres' moves, then looks again only at points whose bounds overlap. Returns changes. */
  reassign(): number {
    const { labels, upper, lower, halfGap } = this;
    this.measureGaps();
    const [largest, second, largestZone] = this.largestMoves();
    let changes = 0;
    for (let point = 0; point < this.points.count; point++) {
      const zone = labels[point]!;
      upper[point] = upper[point]! + this.moved[zone]!;
      lower[point] = lower[point]! - (zone === largestZone ? second : largest);
      const safe = Math.max(halfGap[zone]!, lower[point]!);
      if (upper[point]! <= safe) continue;
      upper[point] = this.distance(point, zone);
      if (upper[point]! <= safe) continue;
      this.findNearest(point);
      if (labels[point] === zone) continue;
      this.account(point, zone, -1);
      this.account(point, labels[point]!, 1);
      changes++;
    }
    return changes;
  }

  inertia(): number {
    let total = 0;
    for (let point = 0; point < this.points.count; point++) total += this.distance(point, this.labels[point]!) ** 2;
    return total;
  }

  private distance(point: number, zone: number): number {
    const { values, dimensions } = this.points;
    let squared = 0;
    for (let f = 0; f < dimensions; f++) {
      const difference = values[point * dimensions + f]! - this.centres[zone * dimensions + f]!;
      squared += difference * difference;
    }
    return Math.sqrt(squared);
  }

  private findNearest(point: number): void {
    const { values, dimensions } = this.points;
    const base = point * dimensions;
    let nearest = 0;
    let best = Infinity;
    let next = Infinity;
    for (let zone = 0, c = 0; zone < this.k; zone++) {
      let squared = 0;
      for (let f = 0; f < dimensions; f++, c++) {
        const difference = values[base + f]! - this.centres[c]!;
        squared += difference * difference;
      }
      if (squared < best) {
        next = best;
        best = squared;
        nearest = zone;
      } else if (squared < next) next = squared;
    }
    this.labels[point] = nearest;
    this.upper[point] = Math.sqrt(best);
    this.lower[point] = Math.sqrt(next);
  }

  private account(point: number, zone: number, sign: 1 | -1): void {
    const { values, dimensions } = this.points;
    this.sizes[zone] = this.sizes[zone]! + sign;
    for (let f = 0; f < dimensions; f++) {
      this.sums[zone * dimensions + f] = this.sums[zone * dimensions + f]! + sign * values[point * dimensions + f]!;
    }
  }

  private measureGaps(): void {
    const { dimensions } = this.points;
    this.halfGap.fill(Infinity);
    for (let a = 0; a < this.k; a++) {
      for (let b = a + 1; b < this.k; b++) {
        let squared = 0;
        for (let f = 0; f < dimensions; f++) squared += (this.centres[a * dimensions + f]! - this.centres[b * dimensions + f]!) ** 2;
        const half = Math.sqrt(squared) / 2;
        this.halfGap[a] = Math.min(this.halfGap[a]!, half);
        this.halfGap[b] = Math.min(this.halfGap[b]!, half);
      }
    }
  }

  private largestMoves(): [largest: number, second: number, zone: number] {
    let largest = 0;
    let second = 0;
    let at = -1;
    for (let zone = 0; zone < this.k; zone++) {
      const move = this.moved[zone]!;
      if (move > largest) {
        second = largest;
        largest = move;
        at = zone;
      } else if (move > second) second = move;
    }
    return [largest, second, at];
  }

  /** False when every point sits on its centre already: fewer different points than zones. */
  private repairEmpty(zone: number): boolean {
    const { dimensions } = this.points;
    let farthest = -1;
    let most = 0;
    for (let point = 0; point < this.points.count; point++) {
      const distance = this.distance(point, this.labels[point]!);
      if (distance > most) {
        most = distance;
        farthest = point;
      }
    }
    this.moved[zone] = 0;
    if (farthest < 0) return false;
    for (let f = 0; f < dimensions; f++) this.centres[zone * dimensions + f] = this.points.values[farthest * dimensions + f]!;
    return true;
  }
}
