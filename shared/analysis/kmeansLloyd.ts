/**
 * One k-means run from given centres to a fixed point: Lloyd's iteration (Lloyd 1982) with a triangle-inequality bound
 * after Hamerly 2010 ("Making k-means even faster"): the distance to the next centre minus that to the own cannot shrink by
 * more than the centres moved, so a point with enough of it left cannot change and costs no distance. His two bounds are
 * kept as their difference: one number to read and write a point. Same result as plain Lloyd. A zone left without points
 * takes the point farthest from its centre (common practice).
 */

import { kmeansMemory, type KMeansMemory } from './kmeansMemory.ts';
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
  const memory = kmeansMemory(points, start.length / points.dimensions);
  memory.centres.set(start);
  memory.moved.fill(0);
  assignAll(memory);
  let iterations = 0;
  let converged = false;
  while (!converged && iterations < maxIterations) {
    iterations++;
    if (moveCentres(points, memory)) {
      assignAll(memory);
      continue;
    }
    converged = reassign(memory) === 0;
  }
  const { kernel, count, width, at } = memory;
  const inertia = kernel.inertia(at.values, count, width, at.centres, at.labels);
  return { centres: memory.centres.slice(), labels: memory.labels.slice(), inertia, iterations, converged };
}

/** Gives every point its nearest centre from scratch and sets sums, sizes and leads. */
function assignAll({ kernel, count, width, k, at, sums, sizes }: KMeansMemory): void {
  sums.fill(0);
  sizes.fill(0);
  kernel.assignAll(at.values, count, width, k, at.centres, at.labels, at.lead, at.sums, at.sizes);
}

/** Centres become the means of their points; true when an empty zone had to be given a point. */
function moveCentres(points: PointTable, memory: KMeansMemory): boolean {
  const { dimensions } = points;
  const { centres, sums, sizes, moved } = memory;
  let repaired = false;
  for (let zone = 0; zone < memory.k; zone++) {
    if (sizes[zone] === 0) {
      repaired = repairEmpty(points, memory, zone) || repaired;
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
function reassign(memory: KMeansMemory): number {
  const { kernel, count, width, k, at } = memory;
  setLosses(memory);
  setHalfGaps(memory);
  return kernel.reassign(at.values, count, width, k, at.centres, at.labels, at.lead, at.sums, at.sizes, at.loss, at.halfGap);
}

/** Half the distance from each centre to the nearest other. */
function setHalfGaps({ k, centres, halfGap }: KMeansMemory): void {
  const dimensions = centres.length / k;
  halfGap.fill(Infinity);
  for (let a = 0; a < k; a++) {
    for (let b = a + 1; b < k; b++) {
      let squared = 0;
      for (let f = 0; f < dimensions; f++) squared += (centres[a * dimensions + f]! - centres[b * dimensions + f]!) ** 2;
      const half = Math.sqrt(squared) / 2;
      halfGap[a] = Math.min(halfGap[a]!, half);
      halfGap[b] = Math.min(halfGap[b]!, half);
    }
  }
}

/** Per zone: its own move plus the largest move of any other. */
function setLosses({ moved, loss }: KMeansMemory): void {
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
  for (let zone = 0; zone < moved.length; zone++) loss[zone] = moved[zone]! + (zone === at ? second : largest);
}

/** False when every point sits on its centre already: fewer different points than zones. */
function repairEmpty(points: PointTable, memory: KMeansMemory, zone: number): boolean {
  const { values, dimensions } = points;
  let farthest = -1;
  let most = 0;
  for (let point = 0; point < points.count; point++) {
    const squared = squaredToOwn(points, memory, point);
    if (squared > most) {
      most = squared;
      farthest = point;
    }
  }
  memory.moved[zone] = 0;
  if (farthest < 0) return false;
  for (let f = 0; f < dimensions; f++) memory.centres[zone * dimensions + f] = values[farthest * dimensions + f]!;
  return true;
}

function squaredToOwn({ values, dimensions }: PointTable, { centres, labels }: KMeansMemory, point: number): number {
  let squared = 0;
  for (let f = 0, p = point * dimensions, c = labels[point]! * dimensions; f < dimensions; f++, p++, c++) {
    const difference = values[p]! - centres[c]!;
    squared += difference * difference;
  }
  return squared;
}
