/**
 * Starting centres for k-means: greedy k-means++ (Arthur & Vassilvitskii 2007). Each next centre is drawn among the
 * points with odds equal to the squared distance to the nearest centre so far; of 2 + ⌊ln k⌋ draws the one is kept
 * that leaves the smallest total. Cost count × k × draws distances.
 */

import type { PointTable } from './kmeansPoints.ts';
import { randomIndex, type Random } from './random.ts';

/** k centres, row after row. Points that coincide may give coinciding centres; the refinement repairs empty zones. */
export function seedCentres(points: PointTable, k: number, random: Random): Float64Array {
  const first = randomIndex(random, points.count);
  return moreCentres(points, points.values.slice(first * points.dimensions, (first + 1) * points.dimensions), { k, random });
}

/** The given centres and as many drawn ones as make k: a warm start from fewer zones to more. */
export function moreCentres(points: PointTable, given: Float64Array, { k, random }: { k: number; random: Random }): Float64Array {
  const { count, dimensions, values } = points;
  const centres = new Float64Array(k * dimensions);
  centres.set(given);
  let nearest = new Float64Array(count).fill(Infinity);
  let trial = new Float64Array(count);
  let kept = new Float64Array(count);
  const already = given.length / dimensions;
  let total = 0;
  for (let zone = 0; zone < already; zone++) {
    total = shorten(points, nearest, { target: given, at: zone * dimensions, into: trial });
    [nearest, trial] = [trial, nearest];
  }
  const draws = 2 + Math.floor(Math.log(k));
  for (let zone = already; zone < k; zone++) {
    let best = Infinity;
    let chosen = 0;
    for (let draw = 0; draw < draws; draw++) {
      const point = drawByWeight(nearest, random() * total);
      const left = shorten(points, nearest, { target: values, at: point * dimensions, into: trial });
      if (left >= best) continue;
      best = left;
      chosen = point;
      [kept, trial] = [trial, kept];
    }
    for (let f = 0; f < dimensions; f++) centres[zone * dimensions + f] = values[chosen * dimensions + f]!;
    [nearest, kept] = [kept, nearest];
    total = best;
  }
  return centres;
}

interface Target {
  /** Numbers that hold the target's position from index `at`. */
  readonly target: Float64Array;
  readonly at: number;
  readonly into: Float64Array;
}

/** Squared distance of every point to the target, or what it was when that is shorter; returns the sum. */
function shorten({ values, count, dimensions }: PointTable, before: Float64Array, { target, at, into }: Target): number {
  let total = 0;
  for (let point = 0, p = 0; point < count; point++) {
    let distance = 0;
    for (let f = 0; f < dimensions; f++, p++) {
      const difference = values[p]! - target[at + f]!;
      distance += difference * difference;
    }
    const sofar = before[point]!;
    if (sofar < distance) distance = sofar;
    into[point] = distance;
    total += distance;
  }
  return total;
}

function drawByWeight(weights: Float64Array, target: number): number {
  let running = 0;
  for (let i = 0; i < weights.length; i++) {
    running += weights[i]!;
    if (running > target) return i;
  }
  return weights.length - 1;
}
