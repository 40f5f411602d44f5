import { mean, sampleVariance } from 'simple-statistics';
import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * Means and variances of readings, and their pooling by degrees of freedom.
 * Always in two passes around the mean: the one-pass form Σx² − n·x̄² turns negative on values such as
 * 10000000.1 (NIST StRD NumAcc4). The first value is taken off before either pass, so that leading digits
 * that all readings share cost nothing.
 */

export interface Summary {
  readonly n: number;
  /** NaN when there is no reading. */
  readonly mean: number;
  /** Divisor n − 1; NaN for fewer than two readings. */
  readonly variance: number;
  readonly sd: number;
}

/** Example: 22.1 23.4 21.8 22.9 23.0 22.4 21.6 23.7 22.5 22.8 → mean 22.62, sd 0.672970. */
export function summarise(values: readonly number[]): Summary {
  const n = values.length;
  if (n === 0) return { n, mean: Number.NaN, variance: Number.NaN, sd: Number.NaN };
  const origin = values[0]!;
  const shifted = values.map((value) => value - origin);
  const centre = origin + mean(shifted);
  if (n === 1) return { n, mean: centre, variance: Number.NaN, sd: Number.NaN };
  const variance = sampleVariance(shifted);
  return { n, mean: centre, variance, sd: Math.sqrt(variance) };
}

/**
 * A spread no smaller than that of what rounding to a step took away, step/√12: three bags that all read 21.0 are not
 * known to the last digit. Source: variance of a rectangular distribution, JCGM 100:2008 §4.3.7. Example: 0 with a step
 * of 0.1 → 0.028868. NaN stays NaN.
 */
export function sdAboveRounding(sd: number, step: number): number {
  return Math.max(sd, step / Math.sqrt(12));
}

/** Σ(xᵢ−x̄)(xᵢ₋₁−x̄)/Σ(xᵢ−x̄)²: how alike neighbours in the list are (NIST StRD definition). */
export function lagOneCorrelation(values: readonly number[]): number {
  const { mean: centre } = summarise(values);
  const deviations = values.map((value) => value - centre);
  let products = 0;
  let squares = 0;
  deviations.forEach((deviation, i) => {
    squares += deviation * deviation;
    if (i > 0) products += deviation * deviations[i - 1]!;
  });
  return products / squares;
}

/**
 * How many independent readings n equally spaced readings along a line are worth when neighbours correlate by ρ
 * and the correlation falls as ρ^distance (Cressie 1993, Statistics for Spatial Data §1.3). For consecutive
 * vines; a random sample of a fixed zone must not be corrected by it. Example: n 10, ρ 0.26 → 6.2199.
 */
export function effectiveSampleSize(n: number, correlation: number): number {
  const odds = correlation / (1 - correlation);
  return n / (1 + 2 * odds * (1 - 1 / n) - (2 * odds * odds * (1 - correlation ** (n - 1))) / n);
}

export interface VariancePart {
  readonly variance: number;
  /** Degrees of freedom; need not be whole when older seasons weigh less. */
  readonly df: number;
}

/** Σ df·s² / Σ df, the within mean square of a one-way analysis of variance. No usable part gives NaN with df 0. */
export function pooledVariance(parts: readonly VariancePart[]): VariancePart {
  let df = 0;
  let sum = 0;
  for (const part of parts) {
    if (part.df <= 0) continue;
    df += part.df;
    sum += part.df * part.variance;
  }
  return { variance: df > 0 ? sum / df : Number.NaN, df };
}

/** Share of its weight that a season keeps for each year of age; judgement. */
export const SEASON_WEIGHT = 0.7;

/** A part from `age` seasons ago counts with 0.7^age of its degrees of freedom. */
export function ageWeighted(part: VariancePart, age: number, weight = SEASON_WEIGHT): VariancePart {
  if (age < 0) throw new AnalysisError('season_in_future', `A reading is ${-age} seasons newer than the season being planned. Check its date.`);
  return { variance: part.variance, df: part.df * weight ** age };
}
