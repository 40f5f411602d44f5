/**
 * Starting centres for k-means: greedy k-means++ (Arthur & Vassilvitskii 2007). Each next centre is drawn among the
 * points with odds equal to the squared distance to the nearest centre so far; of 2 + ⌊ln k⌋ draws the one is kept
 * that leaves the smallest total. Cost count × k × draws distances.
 */

import type { PointTable } from './kmeansPoints.ts';
import { randomIndex, type Random } from './random.ts';

/** k centres, row after row. Points that coincide may give coinciding centres; the refinement repairs empty zones. */
export function seedCentres(points: PointTable, k: number, random: Random): Float64Array {
  const { count, dimensions } = points;
  const centres = new Float64Array(k * dimensions);
  const copyPoint = (point: number, zone: number) => {
    for (let f = 0; f < dimensions; f++) centres[zone * dimensions + f] = points.values[point * dimensions + f]!;
  };
  const first = randomIndex(random, count);
  copyPoint(first, 0);
  let nearest = squaredDistancesTo(points, first, null);
  const draws = 2 + Math.floor(Math.log(k));
  for (let zone = 1; zone < k; zone++) {
    let best = { point: 0, total: Infinity, nearest };
    for (let draw = 0; draw < draws; draw++) {
      const point = drawByWeight(nearest.squared, random() * nearest.total);
      const candidate = squaredDistancesTo(points, point, nearest.squared);
      if (candidate.total < best.total) best = { point, total: candidate.total, nearest: candidate };
    }
    copyPoint(best.point, zone);
    nearest = best.nearest;
  }
  return centres;
}

interface Nearest {
  readonly squared: Float64Array;
  readonly total: number;
}

/** Squared distance of every point to one of them, or to the nearest centre so far when that is closer. */
function squaredDistancesTo(points: PointTable, target: number, sofar: Float64Array | null): Nearest {
  const { values, count, dimensions } = points;
  const squared = new Float64Array(count);
  const base = target * dimensions;
  let total = 0;
  for (let point = 0; point < count; point++) {
    let distance = 0;
    for (let f = 0; f < dimensions; f++) {
      const difference = values[point * dimensions + f]! - values[base + f]!;
      distance += difference * difference;
    }
    if (sofar !== null && sofar[point]! < distance) distance = sofar[point]!;
    squared[point] = distance;
    total += distance;
  }
  return { squared, total };
}

function drawByWeight(weights: Float64Array, target: number): number {
  let running = 0;
  for (let i = 0; i < weights.length; i++) {
    running += weights[i]!;
    if (running > target) return i;
  }
  return weights.length - 1;
}
