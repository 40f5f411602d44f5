/**
 * Hartigan's exchange: moves single points between zones while that lowers the sum of squares, with the means moving at
 * once (Hartigan 1975; Hartigan & Wong 1979). Leaving a zone of n points saves n/(n−1)·d², joining one costs n/(n+1)·d²,
 * so it still finds moves where Lloyd's iteration stands still; its end points are a subset of Lloyd's (Telgarsky &
 * Vattani 2010), so every point is still nearest to its own mean.
 */

import type { KMeansRun } from './kmeansLloyd.ts';
import { kmeansMemory } from './kmeansMemory.ts';
import type { PointTable } from './kmeansPoints.ts';

/** The run after all exchanges that help; each pass costs count × k distances. */
export function exchangePoints(points: PointTable, run: KMeansRun, maxPasses = 50): KMeansRun {
  const memory = kmeansMemory(points, run.centres.length / points.dimensions);
  const { kernel, count, k, width, at, sizes } = memory;
  memory.centres.set(run.centres);
  memory.labels.set(run.labels);
  sizes.fill(0);
  for (let point = 0; point < count; point++) sizes[run.labels[point]!]! += 1;
  const moved = new Int32Array(kernel.memory.buffer, 0, 1);
  let gained = 0;
  let passes = 0;
  for (let moves = 1; moves > 0 && passes < maxPasses; passes++) {
    gained = kernel.exchange(at.values, count, width, k, at.centres, at.labels, at.sizes, gained);
    moves = moved[0]!;
  }
  return { ...run, centres: memory.centres.slice(), labels: memory.labels.slice(), inertia: run.inertia - gained, iterations: run.iterations + passes };
}
