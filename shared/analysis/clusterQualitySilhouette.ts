/**
 * Silhouette (Rousseeuw 1987): per point (b − a) / max(a, b), with a the mean distance to the other points of its zone
 * and b the smallest mean distance to the points of another zone; 0 for a point alone in its zone. Several partitions of
 * the same points (k = 2…6) share one pass over the distances: count² / 2 distances, so call it on a sample.
 */

import type { PointTable } from './kmeansPoints.ts';

/** Mean silhouette of each labelling of the points; NaN for a labelling of fewer than two zones. */
export function silhouettes(points: PointTable, labellings: readonly ArrayLike<number>[]): number[] {
  return silhouettesByPoint(points, labellings).map((values) => values.reduce((sum, value) => sum + value, 0) / values.length);
}

/** The silhouette of every point under each labelling. */
export function silhouettesByPoint(points: PointTable, labellings: readonly ArrayLike<number>[]): Float64Array[] {
  const { count } = points;
  const zones = labellings.map((labels) => maximum(labels) + 1);
  const sums = zones.map((k) => new Float64Array(count * k));
  for (let a = 0; a < count; a++) {
    for (let b = a + 1; b < count; b++) {
      const distance = distanceBetweenPoints(points, a, b);
      for (let l = 0; l < labellings.length; l++) {
        const labels = labellings[l]!;
        const k = zones[l]!;
        const sum = sums[l]!;
        sum[a * k + labels[b]!] = sum[a * k + labels[b]!]! + distance;
        sum[b * k + labels[a]!] = sum[b * k + labels[a]!]! + distance;
      }
    }
  }
  return labellings.map((labels, l) => fromSums(labels, sums[l]!, zones[l]!));
}

function fromSums(labels: ArrayLike<number>, sums: Float64Array, k: number): Float64Array {
  const sizes = new Float64Array(k);
  for (let point = 0; point < labels.length; point++) sizes[labels[point]!] = sizes[labels[point]!]! + 1;
  const filled = sizes.filter((size) => size > 0).length;
  return Float64Array.from({ length: labels.length }, (_, point) => {
    if (filled < 2) return NaN;
    const own = labels[point]!;
    if (sizes[own] === 1) return 0;
    const inside = sums[point * k + own]! / (sizes[own]! - 1);
    let outside = Infinity;
    for (let zone = 0; zone < k; zone++) {
      if (zone !== own && sizes[zone]! > 0) outside = Math.min(outside, sums[point * k + zone]! / sizes[zone]!);
    }
    const larger = Math.max(inside, outside);
    return larger > 0 ? (outside - inside) / larger : 0;
  });
}

function distanceBetweenPoints({ values, dimensions }: PointTable, a: number, b: number): number {
  let squared = 0;
  for (let f = 0; f < dimensions; f++) {
    const difference = values[a * dimensions + f]! - values[b * dimensions + f]!;
    squared += difference * difference;
  }
  return Math.sqrt(squared);
}

function maximum(labels: ArrayLike<number>): number {
  let most = 0;
  for (let point = 0; point < labels.length; point++) most = Math.max(most, labels[point]!);
  return most;
}
