/**
 * Stability under resampling: fit on one random half and on the other, let both fits label all points, and compare the
 * two labellings by the adjusted Rand index. 1 = the same zones whichever cells were looked at. It tells unsteady numbers
 * of zones from steady ones, but not zones from a slope: a smooth slope is cut the same way every time.
 */

import { adjustedRandIndex } from './agreement.ts';
import { assignToCentres, fitKMeans } from './kmeans.ts';
import { selectPoints, type PointTable } from './kmeansPoints.ts';
import { shuffled, type Random } from './random.ts';

export interface StabilityOptions {
  readonly k: number;
  readonly random: Random;
  readonly splits?: number;
  readonly restarts?: number;
}

/** Mean agreement over `splits` random halvings. */
export function halfSplitStability(points: PointTable, { k, random, splits = 4, restarts = 5 }: StabilityOptions): number {
  const all = Array.from({ length: points.count }, (_, i) => i);
  const middle = Math.floor(points.count / 2);
  let sum = 0;
  for (let split = 0; split < splits; split++) {
    const order = shuffled(all, random);
    const labellings = [order.slice(0, middle), order.slice(middle)].map((half) =>
      assignToCentres(points, fitKMeans(selectPoints(points, half), { k, random, restarts }).centres),
    );
    sum += adjustedRandIndex(labellings[0]!, labellings[1]!);
  }
  return sum / splits;
}
