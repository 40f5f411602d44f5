/**
 * One k-means run from given centres to a fixed point: Lloyd's iteration (Lloyd 1982) with a triangle-inequality bound
 * after Hamerly 2010 ("Making k-means even faster"): the distance to the next centre minus that to the own cannot shrink by
 * more than the centres moved, so a point with enough of it left cannot change and costs no distance. His two bounds are
 * kept as their difference: one number to read and write a point. Same result as plain Lloyd. A zone left without points
 * takes the point farthest from its centre (common practice).
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
  /** Bound from below on how much farther the next centre is than the own. */
  readonly lead: Float64Array;
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
    lead: new Float64Array(points.count),
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

/** Takes the centres' moves off each point's lead and looks again only where none is left. Returns changes. */
function reassign(points: PointTable, state: LloydState): number {
  const { values, count, dimensions } = points;
  const { labels, lead, centres } = state;
  const loss = possibleLosses(state.moved);
  const halfGap = halfGaps(state, dimensions);
  let changes = 0;
  for (let point = 0; point < count; point++) {
    const zone = labels[point]!;
    const left = lead[point]! - loss[zone]!;
    lead[point] = left;
    if (left > 0) continue;
    let squared = 0;
    for (let f = 0, p = point * dimensions, c = zone * dimensions; f < dimensions; f++, p++, c++) {
      const difference = values[p]! - centres[c]!;
      squared += difference * difference;
    }
    // Within half the way to the nearest other centre no other can be nearer.
    if (squared < halfGap[zone]! * halfGap[zone]!) {
      lead[point] = 2 * (halfGap[zone]! - Math.sqrt(squared));
      continue;
    }
    findNearest(points, state, point);
    if (labels[point] === zone) continue;
    account(points, state, point, zone, -1);
    account(points, state, point, labels[point]!, 1);
    changes++;
  }
  return changes;
}

/** Half the distance from each centre to the nearest other. */
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

/** Per zone: its own move plus the largest move of any other. */
function possibleLosses(moved: Float64Array): Float64Array {
  let largest = 0;
  let second = 0;
  let at = -1;
  for (let zone = 0; zone < moved.length; zone++) {
    if (moved[zone]! > largest) {
      second = largest;
      largest = moved[zone]!;
      at = zone;
    } else if (moved[zone]! > second) second = moved[zone]!;
  }
  return moved.map((move, zone) => move + (zone === at ? second : largest));
}

function findNearest({ values, dimensions }: PointTable, { k, centres, labels, lead }: LloydState, point: number): void {
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
  lead[point] = Math.sqrt(next) - Math.sqrt(best);
}

function account({ values, dimensions }: PointTable, { sums, sizes }: LloydState, point: number, zone: number, sign: 1 | -1): void {
  sizes[zone] = sizes[zone]! + sign;
  for (let f = 0; f < dimensions; f++) {
    sums[zone * dimensions + f] = sums[zone * dimensions + f]! + sign * values[point * dimensions + f]!;
  }
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
