/**
 * How well a partition of points fits them: sums of squares, share explained, Calinski–Harabasz, Davies–Bouldin.
 * In: point table, labels 0…k−1, k. All figures use the means of the labelled points, not the centres of a fit, so they
 * hold for any zones, drawn by hand too. Cost: two passes over the points.
 */

import type { PointTable } from './kmeansPoints.ts';

export interface Partition {
  /** k × dimensions, row after row; NaN for a zone without points. */
  readonly means: Float64Array;
  readonly sizes: Float64Array;
  /** Sum of squared distances to the own mean, per zone. */
  readonly withinByZone: Float64Array;
  readonly within: number;
  /** Sum of squared distances to the mean of all points. */
  readonly total: number;
}

/** Sum of squared distances to the mean of all points: the same for every partition of them. */
export function totalSquares({ values, count, dimensions }: PointTable): number {
  const grand = new Float64Array(dimensions);
  for (let at = 0; at < values.length; at += dimensions) for (let f = 0; f < dimensions; f++) grand[f]! += values[at + f]! / count;
  let total = 0;
  for (let at = 0; at < values.length; at += dimensions) {
    for (let f = 0; f < dimensions; f++) {
      const difference = values[at + f]! - grand[f]!;
      total += difference * difference;
    }
  }
  return total;
}

/** Means, sizes and sums of squares of a labelled table; `total` where it is known already. */
export function describePartition(points: PointTable, labels: ArrayLike<number>, k: number, total = totalSquares(points)): Partition {
  const { dimensions } = points;
  const means = new Float64Array(k * dimensions);
  const sizes = new Float64Array(k);
  addPoints(points, labels, { sizes, sums: means });
  for (let zone = 0; zone < k; zone++) for (let f = 0; f < dimensions; f++) means[zone * dimensions + f] = means[zone * dimensions + f]! / sizes[zone]!;
  const withinByZone = squaresByZone(points, labels, means, k);
  return { means, sizes, withinByZone, within: withinByZone.reduce((sum, part) => sum + part, 0), total };
}

function addPoints({ values, count, dimensions }: PointTable, labels: ArrayLike<number>, { sizes, sums }: { sizes: Float64Array; sums: Float64Array }): void {
  for (let point = 0; point < count; point++) {
    const zone = labels[point]!;
    sizes[zone]! += 1;
    for (let f = 0; f < dimensions; f++) sums[zone * dimensions + f]! += values[point * dimensions + f]!;
  }
}

function squaresByZone({ values, count, dimensions }: PointTable, labels: ArrayLike<number>, means: Float64Array, k: number): Float64Array {
  const squares = new Float64Array(k);
  for (let point = 0; point < count; point++) {
    const zone = labels[point]!;
    for (let f = 0; f < dimensions; f++) {
      const difference = values[point * dimensions + f]! - means[zone * dimensions + f]!;
      squares[zone]! += difference * difference;
    }
  }
  return squares;
}

/** Share of the total sum of squares between zones, 0…1 (R²; Dobermann et al. 2003 call 1 − R² the relative variance left). */
export function varianceExplained({ within, total }: Partition): number {
  return total > 0 ? 1 - within / total : 0;
}

/** [between/(k−1)] / [within/(n−k)] (Calinski & Harabasz 1974). NaN for one zone; Infinity when nothing is left within. */
export function calinskiHarabasz({ within, total, sizes }: Partition): number {
  const k = sizes.length;
  const count = sizes.reduce((sum, size) => sum + size, 0);
  return k < 2 ? NaN : (total - within) / (k - 1) / (within / (count - k));
}

/**
 * Mean over zones of the worst (σi + σj) / dij, with σ the mean distance to the own mean and d the distance between
 * means (Davies & Bouldin 1979). Smaller is better; NaN for one zone.
 */
export function daviesBouldin(points: PointTable, labels: ArrayLike<number>, partition: Partition): number {
  const { dimensions } = points;
  const { means, sizes } = partition;
  const k = sizes.length;
  if (k < 2) return NaN;
  const spread = spreadByZone(points, labels, partition);
  let sum = 0;
  for (let a = 0; a < k; a++) {
    let worst = 0;
    for (let b = 0; b < k; b++) if (a !== b) worst = Math.max(worst, (spread[a]! + spread[b]!) / distanceBetween(means, a, means, b, dimensions));
    sum += worst;
  }
  return sum / k;
}

function spreadByZone({ values, count, dimensions }: PointTable, labels: ArrayLike<number>, { means, sizes }: Partition): Float64Array {
  const spread = new Float64Array(sizes.length);
  for (let point = 0; point < count; point++) {
    const zone = labels[point]!;
    spread[zone]! += distanceBetween(values, point, means, zone, dimensions) / sizes[zone]!;
  }
  return spread;
}

function distanceBetween(a: Float64Array, rowA: number, b: Float64Array, rowB: number, dimensions: number): number {
  let squared = 0;
  for (let f = 0; f < dimensions; f++) squared += (a[rowA * dimensions + f]! - b[rowB * dimensions + f]!) ** 2;
  return Math.sqrt(squared);
}
