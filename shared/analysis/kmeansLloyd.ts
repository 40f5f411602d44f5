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
  const state = firstState(points, start);
  assignAll(points, state);
  let iterations = 0;
  let converged = false;
  while (!converged && iterations < maxIterations) {
    iterations++;
    if (moveCentres(points, state)) {
      assignAll(points, state);
      continue;
    }
    converged = reassign(points, state) === 0;
  }
  return { centres: state.centres, labels: state.labels, inertia: inertiaOf(points, state), iterations, converged };
}

/** Working arrays of one run; everything here belongs to the run alone and is changed in place. */
interface LloydState {
  readonly k: number;
  readonly centres: Float64Array;
  readonly labels: Uint8Array;
  /** Bound from above on the distance to the own centre, from below on the distance to any other. */
  readonly upper: Float64Array;
  readonly lower: Float64Array;
  readonly sums: Float64Array;
  readonly sizes: Float64Array;
  /** How far each centre moved last. */
  readonly moved: Float64Array;
}

function firstState(points: PointTable, start: Float64Array): LloydState {
  const k = start.length / points.dimensions;
  return {
    k,
    centres: start.slice(),
    labels: new Uint8Array(points.count),
    upper: new Float64Array(points.count),
    lower: new Float64Array(points.count),
    sums: new Float64Array(start.length),
    sizes: new Float64Array(k),
    moved: new Float64Array(k),
  };
}

/** Gives every point its nearest centre from scratch and sets sums, sizes and bounds. */
function assignAll(points: PointTable, state: LloydState): void {
  state.sums.fill(0);
  state.sizes.fill(0);
  for (let point = 0; point < points.count; point++) {
    findNearest(points, state, point);
    account(points, state, point, state.labels[point]!, 1);
  }
}

/** Centres become the means of their points; true when an empty zone had to be given a point. */
function moveCentres(points: PointTable, state: LloydState): boolean {
  const { dimensions } = points;
  const { centres, sums, sizes, moved } = state;
  let repaired = false;
  for (let zone = 0; zone < state.k; zone++) {
    if (sizes[zone] === 0) {
      repaired = repairEmpty(points, state, zone) || repaired;
      continue;
    }
    let shift = 0;
    for (let c = zone * dimensions; c < (zone + 1) * dimensions; c++) {
      const mean = sums[c]! / sizes[zone]!;
      shift += (mean - centres[c]!) ** 2;
      centres[c] = mean;
    }
    moved[zone] = Math.sqrt(shift);
  }
  return repaired;
}

/** Loosens the bounds by the centres' moves, then looks again only at points whose bounds overlap. Returns changes. */
function reassign(points: PointTable, state: LloydState): number {
  const { values, count, dimensions } = points;
  const { centres, labels, upper, lower, moved } = state;
  const halfGap = halfGaps(state, dimensions);
  const moves = largestMoves(moved);
  let changes = 0;
  for (let point = 0; point < count; point++) {
    const zone = labels[point]!;
    const above = upper[point]! + moved[zone]!;
    const below = lower[point]! - (zone === moves.zone ? moves.second : moves.largest);
    upper[point] = above;
    lower[point] = below;
    const safe = below > halfGap[zone]! ? below : halfGap[zone]!;
    if (above <= safe) continue;
    let squared = 0;
    for (let f = 0, p = point * dimensions, c = zone * dimensions; f < dimensions; f++, p++, c++) {
      const difference = values[p]! - centres[c]!;
      squared += difference * difference;
    }
    const exact = Math.sqrt(squared);
    upper[point] = exact;
    if (exact <= safe) continue;
    findNearest(points, state, point);
    if (labels[point] === zone) continue;
    account(points, state, point, zone, -1);
    account(points, state, point, labels[point]!, 1);
    changes++;
  }
  return changes;
}

function findNearest({ values, dimensions }: PointTable, { k, centres, labels, upper, lower }: LloydState, point: number): void {
  const base = point * dimensions;
  let nearest = 0;
  let best = Infinity;
  let next = Infinity;
  for (let zone = 0, c = 0; zone < k; zone++) {
    let squared = 0;
    for (let f = 0; f < dimensions; f++, c++) {
      const difference = values[base + f]! - centres[c]!;
      squared += difference * difference;
    }
    if (squared < best) {
      next = best;
      best = squared;
      nearest = zone;
    } else if (squared < next) next = squared;
  }
  labels[point] = nearest;
  upper[point] = Math.sqrt(best);
  lower[point] = Math.sqrt(next);
}

function account({ values, dimensions }: PointTable, { sums, sizes }: LloydState, point: number, zone: number, sign: 1 | -1): void {
  sizes[zone] = sizes[zone]! + sign;
  for (let f = 0; f < dimensions; f++) {
    sums[zone * dimensions + f] = sums[zone * dimensions + f]! + sign * values[point * dimensions + f]!;
  }
}

/** Half the distance from each centre to the nearest other: a point closer than that to its own cannot change. */
function halfGaps({ k, centres }: LloydState, dimensions: number): Float64Array {
  const halfGap = new Float64Array(k).fill(Infinity);
  for (let a = 0; a < k; a++) {
    for (let b = a + 1; b < k; b++) {
      let squared = 0;
      for (let f = 0; f < dimensions; f++) squared += (centres[a * dimensions + f]! - centres[b * dimensions + f]!) ** 2;
      const half = Math.sqrt(squared) / 2;
      halfGap[a] = Math.min(halfGap[a]!, half);
      halfGap[b] = Math.min(halfGap[b]!, half);
    }
  }
  return halfGap;
}

function largestMoves(moved: Float64Array): { largest: number; second: number; zone: number } {
  let largest = 0;
  let second = 0;
  let zone = -1;
  for (let z = 0; z < moved.length; z++) {
    if (moved[z]! > largest) {
      second = largest;
      largest = moved[z]!;
      zone = z;
    } else if (moved[z]! > second) second = moved[z]!;
  }
  return { largest, second, zone };
}

/** False when every point sits on its centre already: fewer different points than zones. */
function repairEmpty(points: PointTable, state: LloydState, zone: number): boolean {
  const { values, dimensions } = points;
  let farthest = -1;
  let most = 0;
  for (let point = 0; point < points.count; point++) {
    const squared = squaredToOwn(points, state, point);
    if (squared > most) {
      most = squared;
      farthest = point;
    }
  }
  state.moved[zone] = 0;
  if (farthest < 0) return false;
  for (let f = 0; f < dimensions; f++) state.centres[zone * dimensions + f] = values[farthest * dimensions + f]!;
  return true;
}

function inertiaOf(points: PointTable, state: LloydState): number {
  let total = 0;
  for (let point = 0; point < points.count; point++) total += squaredToOwn(points, state, point);
  return total;
}

function squaredToOwn({ values, dimensions }: PointTable, { centres, labels }: LloydState, point: number): number {
  let squared = 0;
  for (let f = 0, p = point * dimensions, c = labels[point]! * dimensions; f < dimensions; f++, p++, c++) {
    const difference = values[p]! - centres[c]!;
    squared += difference * difference;
  }
  return squared;
}
