/**
 * Would every zone come back from other ground? The points are drawn anew, whole patches of ground at a time with
 * replacement, zones are made of what was drawn, and each zone is compared with the most similar new one by the Jaccard
 * coefficient (shared points over points of either): the clusterwise bootstrap of Hennig 2007 ("Cluster-wise assessment of
 * cluster stability"), with patches as the units because neighbouring cells are alike (spatial block bootstrap: Lahiri 2003,
 * "Resampling methods for dependent data"; both from memory). In: points, patch of each, k. Out: mean Jaccard of the zone
 * that holds least, 0…1. Cost: 600 points take about 8 ms.
 */

import { assignToCentres, fitKMeans } from './kmeans.ts';
import { selectPoints, type PointTable } from './kmeansPoints.ts';
import { randomIndex, type Random } from './random.ts';

/** Hennig's own reading of the mean Jaccard (from memory): a zone below the first has dissolved, one below the second is not to be trusted, one from the third on is stable. */
export const DISSOLVED_BELOW = 0.5;
export const TRUSTED_FROM = 0.6;
export const STABLE_FROM = 0.75;

/** Fits on halves that agree better by this are much steadier (judgement). */
const MUCH_STEADIER = 0.15;

export interface Steadiness {
  readonly holds: number | null;
  /** Agreement of fits on halves. */
  readonly stability: number | null;
}

/** Stable where the other is not, or found again much more surely from half of the cells. */
export function isSteadier(one: Steadiness, other: Steadiness): boolean {
  const crosses = one.holds !== null && other.holds !== null && one.holds >= STABLE_FROM && other.holds < STABLE_FROM;
  return crosses || (one.stability !== null && other.stability !== null && one.stability - other.stability >= MUCH_STEADIER);
}

export interface HoldOptions {
  readonly k: number;
  readonly random: Random;
  readonly draws?: number;
  readonly restarts?: number;
}

/** `patchOf` gives the patch of each point, any number. */
export function weakestHold(points: PointTable, patchOf: ArrayLike<number>, { k, random, draws = 10, restarts = 2 }: HoldOptions): number {
  const patches = pointsByPatch(patchOf);
  const own = assignToCentres(points, fitKMeans(points, { k, random, restarts: 2 * restarts }).centres);
  const sums = new Float64Array(k);
  for (let draw = 0; draw < draws; draw++) {
    const drawn = patches.flatMap(() => patches[randomIndex(random, patches.length)]!);
    if (drawn.length < k) continue;
    const again = assignToCentres(points, fitKMeans(selectPoints(points, drawn), { k, random, restarts }).centres);
    bestJaccards(own, again, k).forEach((best, zone) => (sums[zone] = sums[zone]! + best));
  }
  return Math.min(...sums) / draws;
}

/** For each label of the first labelling the Jaccard coefficient with the label of the second that is most like it. */
export function bestJaccards(one: ArrayLike<number>, other: ArrayLike<number>, k: number): number[] {
  const both = new Float64Array(k * k);
  const [inOne, inOther] = [new Float64Array(k), new Float64Array(k)];
  for (let point = 0; point < one.length; point++) {
    const [a, b] = [one[point]!, other[point]!];
    both[a * k + b] = both[a * k + b]! + 1;
    inOne[a] = inOne[a]! + 1;
    inOther[b] = inOther[b]! + 1;
  }
  return Array.from(inOne, (size, a) => Math.max(...Array.from(inOther, (otherSize, b) => both[a * k + b]! / Math.max(1, size + otherSize - both[a * k + b]!))));
}

function pointsByPatch(patchOf: ArrayLike<number>): number[][] {
  const patches = new Map<number, number[]>();
  for (let point = 0; point < patchOf.length; point++) {
    const patch = patches.get(patchOf[point]!);
    if (patch) patch.push(point);
    else patches.set(patchOf[point]!, [point]);
  }
  return [...patches.values()];
}
