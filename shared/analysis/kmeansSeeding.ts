/**
 * Starting centres for k-means: greedy k-means++ (Arthur & Vassilvitskii 2007). Each next centre is drawn among the
 * points with odds equal to the squared distance to the nearest centre so far; of 2 + ⌊ln k⌋ draws the one is kept
 * that leaves the smallest total. Cost count × k × draws distances.
 */

import { kmeansMemory } from './kmeansMemory.ts';
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
  const { kernel, width, at, centres } = kmeansMemory(points, k);
  centres.set(given);
  let [nearest, trial, kept] = at.work;
  new Float64Array(kernel.memory.buffer, nearest, count).fill(Infinity);
  const already = given.length / dimensions;
  let total = 0;
  for (let zone = 0; zone < already; zone++) {
    total = kernel.shorten(at.values, count, width, nearest, at.centres + zone * width, trial);
    [nearest, trial] = [trial, nearest];
  }
  const draws = 2 + Math.floor(Math.log(k));
  for (let zone = already; zone < k; zone++) {
    let best = Infinity;
    let chosen = 0;
    for (let draw = 0; draw < draws; draw++) {
      const point = kernel.draw(nearest, count, random() * total);
      const left = kernel.shorten(at.values, count, width, nearest, at.values + point * width, trial);
      if (left >= best) continue;
      best = left;
      chosen = point;
      [kept, trial] = [trial, kept];
    }
    for (let f = 0; f < dimensions; f++) centres[zone * dimensions + f] = values[chosen * dimensions + f]!;
    [nearest, kept] = [kept, nearest];
    total = best;
  }
  return centres.slice();
}
