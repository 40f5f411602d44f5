import { criticalT } from '../sampling/quantiles.ts';
import { summarise } from '../sampling/variances.ts';
import type { Estimate } from '../sampling/precision.ts';

/**
 * A factor of the estate's own, from what its lots gave: mean, spread and number. For the next lot the spread between
 * lots counts besides the error of the mean (prediction from a normal sample, e.g. Snedecor & Cochran ch. 4).
 */
export interface LearnedFactor {
  readonly n: number;
  readonly mean: number;
  /** Between lots; NaN from one. */
  readonly sd: number;
  /** Where the mean lies; NaN from one lot. */
  readonly low: number;
  readonly high: number;
  /** Too few to be used. */
  readonly few: boolean;
}

export const LOTS_NEEDED = 3;

export function learnFactor(values: readonly number[], confidence: number): LearnedFactor | null {
  if (values.length === 0) return null;
  const { n, mean, sd } = summarise(values);
  const reach = n < 2 ? Number.NaN : (criticalT(confidence, n - 1) * sd) / Math.sqrt(n);
  return { n, mean, sd, low: mean - reach, high: mean + reach, few: n < LOTS_NEEDED };
}

/** What to expect of the next lot. Example: 1.8, 2.0, 2.2 → 2.0 with a standard error of 0.2·√(1 + 1/3) = 0.231. */
export function nextLot({ n, mean, sd }: LearnedFactor): Estimate {
  return { value: mean, standardError: sd * Math.sqrt(1 + 1 / n), df: n - 1 };
}
