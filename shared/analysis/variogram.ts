/**
 * How unlike two readings are that lie a distance apart: the semivariogram from pairs of points.
 * In: points in metres. Out: one bin a class of distances. Estimators: Matheron (1962), half the mean squared difference;
 * Cressie & Hawkins (1980), from fourth powers of mean roots, which a few odd readings hardly move.
 * Cost: a pair each, at most about three million; of larger surveys evenly chosen points are paired with all.
 */
import { boundsOf } from '../geo/bounds.ts';
import type { ValuedPoints } from './resamplePoints.ts';

export interface VariogramBin {
  readonly pairs: number;
  /** Mean distance of the pairs. */
  readonly distanceM: number;
  readonly gamma: number;
}

export interface VariogramOptions {
  readonly estimator?: 'matheron' | 'cressieHawkins';
  /** Pairs farther apart are left out; a third of the diagonal when not said (common practice). */
  readonly cutoffM?: number;
  readonly bins?: number;
}

const mostPairs = 3e6;

/** On a line, one metre apart, 3 5 4 6 8 7 9 10 in bins of a metre gives 1.357143 at 1 m, 2.416667 at 2 m and 4 at 3 m. */
export function empiricalVariogram(points: ValuedPoints, { estimator = 'matheron', cutoffM = thirdOfDiagonal(points), bins = 15 }: VariogramOptions = {}): VariogramBin[] {
  const { x, y, value } = points;
  const sums = { pairs: new Float64Array(bins), distance: new Float64Array(bins), unlike: new Float64Array(bins) };
  const widthM = cutoffM / bins;
  const pairCount = (x.length * (x.length - 1)) / 2;
  const step = Math.max(1, Math.ceil((2 * pairCount) / mostPairs / 2));
  for (let point = 0; point < x.length; point += step) {
    for (let other = step === 1 ? point + 1 : 0; other < x.length; other++) {
      if (other === point) continue;
      const [east, north] = [x[point]! - x[other]!, y[point]! - y[other]!];
      // Ten times as fast as Math.hypot, and metres do not overflow.
      const distanceM = Math.sqrt(east * east + north * north);
      if (distanceM > cutoffM || distanceM === 0) continue;
      const bin = Math.ceil(distanceM / widthM) - 1;
      const difference = Math.abs(value[point]! - value[other]!);
      sums.pairs[bin]! += 1;
      sums.distance[bin]! += distanceM;
      sums.unlike[bin]! += estimator === 'matheron' ? difference * difference : Math.sqrt(difference);
    }
  }
  return Array.from(sums.pairs, (pairs, bin) => ({ pairs, distanceM: sums.distance[bin]! / pairs, gamma: gammaOf(sums.unlike[bin]! / pairs, pairs, estimator) })).filter(({ pairs }) => pairs > 0);
}

function gammaOf(meanUnlike: number, pairs: number, estimator: 'matheron' | 'cressieHawkins'): number {
  return estimator === 'matheron' ? meanUnlike / 2 : meanUnlike ** 4 / (0.457 + 0.494 / pairs) / 2;
}

function thirdOfDiagonal({ x, y }: ValuedPoints): number {
  if (x.length === 0) return 1;
  const [west, south, east, north] = boundsOf([Array.from(x, (east, point): [number, number] => [east, y[point]!])]);
  return Math.max(1e-6, Math.hypot(east - west, north - south) / 3);
}
