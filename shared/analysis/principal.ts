/**
 * Principal components for layers that repeat each other: uncorrelated columns with the same distances between cells, the
 * weak ones left out (Hotelling 1933; Jolliffe 2002). Scores keep their own variances, so that a component counts as much as
 * what it stands for. Cost: cells × columns².
 */

import { eigenOf } from './eigen.ts';
import type { PointTable } from './kmeansPoints.ts';

export interface PrincipalComponents {
  readonly scores: PointTable;
  /** Share of the total variance of every component, kept or not, largest first. */
  readonly shares: readonly number[];
  /** Kept components × columns, row after row; the largest part of each is positive. */
  readonly loadings: Float64Array;
}

const KEPT_SHARE = 0.95;

/** Components that together hold at least `keptShare` of the variance. */
export function principalComponents(points: PointTable, keptShare = KEPT_SHARE): PrincipalComponents {
  const { values, count, dimensions } = points;
  const { means, covariance } = covarianceOf(points);
  const { vectors, values: eigenvalues } = eigenOf(covariance, dimensions);
  const variances = eigenvalues.map((value) => Math.max(0, value));
  const total = variances.reduce((sum, variance) => sum + variance, 0);
  const shares = variances.map((variance) => variance / total);
  let kept = 0;
  for (let sum = 0; kept < dimensions && sum < keptShare - 1e-12; kept++) sum += shares[kept]!;
  const loadings = Float64Array.from(vectors.slice(0, kept).flatMap((vector) => [...vector]));
  const scores = new Float64Array(count * kept);
  for (let point = 0; point < count; point++) {
    for (let c = 0; c < kept; c++) {
      let score = 0;
      for (let f = 0; f < dimensions; f++) score += loadings[c * dimensions + f]! * (values[point * dimensions + f]! - means[f]!);
      scores[point * kept + c] = score;
    }
  }
  return { scores: { values: scores, count, dimensions: kept }, shares, loadings };
}

function covarianceOf({ values, count, dimensions }: PointTable): { means: Float64Array; covariance: Float64Array } {
  const means = new Float64Array(dimensions);
  for (let point = 0; point < count; point++) for (let f = 0; f < dimensions; f++) means[f] = means[f]! + values[point * dimensions + f]! / count;
  const covariance = new Float64Array(dimensions * dimensions);
  for (let point = 0; point < count; point++) {
    for (let a = 0; a < dimensions; a++) {
      const difference = values[point * dimensions + a]! - means[a]!;
      for (let b = 0; b <= a; b++) covariance[a * dimensions + b] = covariance[a * dimensions + b]! + (difference * (values[point * dimensions + b]! - means[b]!)) / count;
    }
  }
  for (let a = 0; a < dimensions; a++) for (let b = 0; b < a; b++) covariance[b * dimensions + a] = covariance[a * dimensions + b]!;
  return { means, covariance };
}
