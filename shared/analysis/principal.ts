/**
 * Principal components for layers that repeat each other: uncorrelated columns with the same distances between cells, the
 * weak ones left out (Hotelling 1933; Jolliffe 2002). Scores keep their own variances, so that a component counts as much as
 * what it stands for. Eigenvectors by Jacobi's rotations, exact for the few columns here. Cost: cells × columns².
 */

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
  const { vectors, variances } = eigenOf(covariance, dimensions);
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

/** Unit eigenvectors with their eigenvalues, largest first, of a symmetric matrix. */
function eigenOf(matrix: Float64Array, size: number): { vectors: Float64Array[]; variances: number[] } {
  const work = matrix.slice();
  const vectors = Float64Array.from({ length: size * size }, (_, at) => (at % (size + 1) === 0 ? 1 : 0));
  for (let sweep = 0; sweep < 60; sweep++) {
    let off = 0;
    for (let a = 0; a < size; a++) for (let b = 0; b < a; b++) off += work[a * size + b]! ** 2;
    if (off < 1e-24) break;
    for (let a = 1; a < size; a++) for (let b = 0; b < a; b++) rotate(work, vectors, { size, a, b });
  }
  const order = Array.from({ length: size }, (_, at) => at).sort((a, b) => work[b * size + b]! - work[a * size + a]!);
  return {
    variances: order.map((at) => Math.max(0, work[at * size + at]!)),
    vectors: order.map((at) => withPositiveLargest(Float64Array.from({ length: size }, (_, row) => vectors[row * size + at]!))),
  };
}

/** One Jacobi rotation in place that makes the element (a, b) zero. */
function rotate(work: Float64Array, vectors: Float64Array, { size, a, b }: { size: number; a: number; b: number }): void {
  const element = work[a * size + b]!;
  if (Math.abs(element) < 1e-300) return;
  const theta = (work[b * size + b]! - work[a * size + a]!) / (2 * element);
  const tangent = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const cosine = 1 / Math.sqrt(tangent * tangent + 1);
  const sine = tangent * cosine;
  const turn = (array: Float64Array, atA: number, atB: number) => {
    const first = array[atA]!;
    const second = array[atB]!;
    array[atA] = cosine * first - sine * second;
    array[atB] = sine * first + cosine * second;
  };
  for (let i = 0; i < size; i++) turn(work, i * size + a, i * size + b);
  for (let i = 0; i < size; i++) turn(work, a * size + i, b * size + i);
  for (let i = 0; i < size; i++) turn(vectors, i * size + a, i * size + b);
}

/** Fixes the sign, which an eigenvector leaves open, so that results do not flip between runs. */
function withPositiveLargest(vector: Float64Array): Float64Array {
  const largest = vector.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0);
  return largest < 0 ? vector.map((value) => -value) : vector;
}
