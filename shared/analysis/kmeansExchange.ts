/**
 * Hartigan's exchange: moves single points between zones while that lowers the sum of squares, with the means moving at
 * once (Hartigan 1975; Hartigan & Wong 1979). Leaving a zone of n points saves n/(n−1)·d², joining one costs n/(n+1)·d²,
 * so it still finds moves where Lloyd's iteration stands still; its end points are a subset of Lloyd's (Telgarsky &
 * Vattani 2010), so every point is still nearest to its own mean.
 */

import type { KMeansRun } from './kmeansLloyd.ts';
import type { PointTable } from './kmeansPoints.ts';

/** The run after all exchanges that help; each pass costs count × k distances. */
export function exchangePoints(points: PointTable, run: KMeansRun, maxPasses = 50): KMeansRun {
  const { count, dimensions } = points;
  const k = run.centres.length / dimensions;
  const state = { centres: run.centres.slice(), labels: run.labels.slice(), sizes: new Float64Array(k) };
  for (const zone of state.labels) state.sizes[zone] = state.sizes[zone]! + 1;
  let gained = 0;
  let passes = 0;
  for (let moves = 1; moves > 0 && passes < maxPasses; passes++) {
    moves = 0;
    for (let point = 0; point < count; point++) {
      const gain = exchangeOne(points, state, point);
      if (gain > 0) moves++;
      gained += gain;
    }
  }
  return { ...run, centres: state.centres, labels: state.labels, inertia: run.inertia - gained, iterations: run.iterations + passes };
}

interface ExchangeState {
  readonly centres: Float64Array;
  readonly labels: Uint8Array;
  readonly sizes: Float64Array;
}

/** Moves one point to the zone where it costs least and returns what that saved; 0 when it stays. */
function exchangeOne(points: PointTable, { centres, labels, sizes }: ExchangeState, point: number): number {
  const { values, dimensions } = points;
  const own = labels[point]!;
  const ownSize = sizes[own]!;
  if (ownSize < 2) return 0;
  let saved = 0;
  let least = Infinity;
  let target = own;
  for (let zone = 0, c = 0; zone < sizes.length; zone++) {
    let squared = 0;
    for (let f = 0; f < dimensions; f++, c++) {
      const difference = values[point * dimensions + f]! - centres[c]!;
      squared += difference * difference;
    }
    if (zone === own) saved = (ownSize / (ownSize - 1)) * squared;
    else if ((sizes[zone]! / (sizes[zone]! + 1)) * squared < least) {
      least = (sizes[zone]! / (sizes[zone]! + 1)) * squared;
      target = zone;
    }
  }
  // A gain below the rounding of the sums is none; without this two zones could pass a point to and fro.
  if (least >= saved * (1 - 1e-12)) return 0;
  for (let f = 0; f < dimensions; f++) {
    const value = values[point * dimensions + f]!;
    centres[own * dimensions + f] = centres[own * dimensions + f]! + (centres[own * dimensions + f]! - value) / (ownSize - 1);
    centres[target * dimensions + f] = centres[target * dimensions + f]! + (value - centres[target * dimensions + f]!) / (sizes[target]! + 1);
  }
  sizes[own] = ownSize - 1;
  sizes[target] = sizes[target]! + 1;
  labels[point] = target;
  return saved - least;
}
