/**
 * Fuzzy c-means (Bezdek 1981) and what it says about doubt: every point belongs to every zone by a share u, 0…1, with
 * sum 1 over the zones. Used for the doubt of cells near a border between zones and for the two validity figures of soil
 * zoning, FPI and NCE (Odeh, McBratney & Chittleborough 1992).
 */

import type { PointTable } from './kmeansPoints.ts';

export interface FuzzyFit {
  /** k × dimensions, row after row. */
  readonly centres: Float64Array;
  /** count × k, row after row. */
  readonly memberships: Float64Array;
  /** Σ u^m · squared distance. */
  readonly objective: number;
  readonly iterations: number;
}

/** Exponent 2 is the usual middle between crisp (1) and shapeless. */
const EXPONENT = 2;

export interface FuzzyOptions {
  /** Centres to start from, k × dimensions; those of k-means make the outcome independent of chance. */
  readonly start: Float64Array;
  readonly exponent?: number;
  readonly maxIterations?: number;
  /** Stop when no membership moves by more. */
  readonly tolerance?: number;
}

/** Alternates memberships and centres until the memberships settle. */
export function fitFuzzy(points: PointTable, options: FuzzyOptions): FuzzyFit {
  const { exponent = EXPONENT, maxIterations = 300, tolerance = 1e-9 } = options;
  let centres = options.start;
  let memberships = membershipsFrom(points, centres, exponent);
  let iterations = 0;
  for (let moved = Infinity; moved > tolerance && iterations < maxIterations; iterations++) {
    centres = weightedCentres(points, memberships, exponent);
    const next = membershipsFrom(points, centres, exponent);
    moved = 0;
    for (let i = 0; i < next.length; i++) moved = Math.max(moved, Math.abs(next[i]! - memberships[i]!));
    memberships = next;
  }
  return { centres, memberships, objective: objectiveOf(points, { centres, memberships }, exponent), iterations };
}

/**
 * Memberships of points for given centres: u_c = 1 / Σ_j (d_c / d_j)^(2/(m−1)). A point on a centre belongs to it alone.
 * In one dimension with centres 0 and 3 and exponent 2, the point 1 belongs by 0.8 and 0.2.
 */
export function membershipsFrom(points: PointTable, centres: Float64Array, exponent = EXPONENT): Float64Array {
  const { count, dimensions } = points;
  const k = centres.length / dimensions;
  const memberships = new Float64Array(count * k);
  const power = 1 / (exponent - 1);
  for (let point = 0; point < count; point++) {
    let sum = 0;
    let onCentre = -1;
    for (let zone = 0; zone < k; zone++) {
      const squared = squaredDistance(points, point, centres, zone);
      if (squared === 0) onCentre = zone;
      const closeness = power === 1 ? 1 / squared : squared ** -power;
      memberships[point * k + zone] = closeness;
      sum += closeness;
    }
    for (let zone = 0; zone < k; zone++) {
      const at = point * k + zone;
      memberships[at] = onCentre >= 0 ? Number(zone === onCentre) : memberships[at]! / sum;
    }
  }
  return memberships;
}

/** Doubt per point, 0 (one zone only) … 1 (two zones equally): second largest membership over the largest. */
export function membershipDoubt(memberships: Float64Array, k: number): Float32Array {
  const count = memberships.length / k;
  const doubt = new Float32Array(count);
  for (let point = 0; point < count; point++) {
    let first = 0;
    let second = 0;
    for (let zone = 0; zone < k; zone++) {
      const share = memberships[point * k + zone]!;
      if (share > first) {
        second = first;
        first = share;
      } else if (share > second) second = share;
    }
    doubt[point] = second / first;
  }
  return doubt;
}

export interface Fuzziness {
  /** Partition coefficient Σu²/n, 1/k … 1. */
  readonly partitionCoefficient: number;
  /** Fuzziness performance index 1 − (kF − 1)/(k − 1): 0 crisp, 1 shapeless. Smaller is better. */
  readonly fpi: number;
  /** Partition entropy −Σ u ln u / n. */
  readonly entropy: number;
  /** Normalised classification entropy H / (1 − k/n), for comparing with published tables. NaN with no more points than zones. */
  readonly nce: number;
  /** H / ln k, 0 … 1 whatever k and n are: what a zoning records. Smaller is better. */
  readonly entropyShare: number;
}

/**
 * The validity figures. FPI is printed in both directions in the literature; here 0 is crisp. The entropy has two norms, both
 * in Bezdek 1981: 1 − k/n, which soil zoning took over as NCE (McBratney & Moore 1985; Odeh, McBratney & Chittleborough 1992;
 * all from memory), and its largest value ln k. With thousands of cells the first is H itself and grows with k, so that
 * numbers of zones are compared by the second.
 */
export function fuzziness(memberships: Float64Array, k: number): Fuzziness {
  const count = memberships.length / k;
  let squares = 0;
  let logs = 0;
  for (const share of memberships) {
    squares += share * share;
    if (share > 0) logs -= share * Math.log(share);
  }
  const partitionCoefficient = squares / count;
  const entropy = logs / count;
  return { partitionCoefficient, fpi: 1 - (k * partitionCoefficient - 1) / (k - 1), entropy, nce: count > k ? entropy / (1 - k / count) : Number.NaN, entropyShare: entropy / Math.log(k) };
}

function weightedCentres(points: PointTable, memberships: Float64Array, exponent: number): Float64Array {
  const { values, count, dimensions } = points;
  const k = memberships.length / count;
  const centres = new Float64Array(k * dimensions);
  const weights = new Float64Array(k);
  for (let point = 0; point < count; point++) {
    for (let zone = 0; zone < k; zone++) {
      const weight = memberships[point * k + zone]! ** exponent;
      weights[zone] = weights[zone]! + weight;
      for (let f = 0; f < dimensions; f++) centres[zone * dimensions + f] = centres[zone * dimensions + f]! + weight * values[point * dimensions + f]!;
    }
  }
  return centres.map((sum, at) => sum / weights[Math.floor(at / dimensions)]!);
}

function objectiveOf(points: PointTable, fit: Pick<FuzzyFit, 'centres' | 'memberships'>, exponent: number): number {
  const k = fit.centres.length / points.dimensions;
  let sum = 0;
  for (let point = 0; point < points.count; point++) {
    for (let zone = 0; zone < k; zone++) sum += fit.memberships[point * k + zone]! ** exponent * squaredDistance(points, point, fit.centres, zone);
  }
  return sum;
}

function squaredDistance(points: PointTable, point: number, centres: Float64Array, zone: number): number {
  const { values, dimensions } = points;
  let squared = 0;
  for (let f = 0; f < dimensions; f++) squared += (values[point * dimensions + f]! - centres[zone * dimensions + f]!) ** 2;
  return squared;
}
