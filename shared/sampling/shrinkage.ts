import { AnalysisError } from '../analysis/analysisError.ts';
import { digamma, trigamma, trigammaInverse } from './specialFunctions.ts';
import { pooledVariance, type VariancePart } from './variances.ts';

/**
 * Variances of zones with few readings, pulled towards a common value: (d₀s₀² + d·s²)/(d₀ + d).
 * Source: Smyth 2004, Statistical Applications in Genetics and Molecular Biology 3(1):3.
 */

/** A common value and how many degrees of freedom it counts for; Infinity when zones do not differ detectably. */
export interface VariancePrior {
  readonly variance: number;
  readonly df: number;
}

/** Zones needed before the strength of the prior can be estimated from them; judgement. */
export const MINIMUM_ZONES_FOR_FIT = 5;

/** Example: prior 1.44 with 6 df, zone 3.6 with 4 df → 2.304 with 10 df. A zone without data gets the prior. */
export function moderateVariance(zone: VariancePart, prior: VariancePrior): VariancePart {
  if (zone.df <= 0) return { variance: prior.variance, df: prior.df };
  if (prior.df === Infinity) return { variance: prior.variance, df: Infinity };
  const df = prior.df + zone.df;
  return { variance: (prior.df * prior.variance + zone.df * zone.variance) / df, df };
}

/**
 * Prior by moments of ln s² (empirical Bayes). `floor` replaces variances of 0, which have no logarithm: give
 * (instrument resolution)²/12. When the logarithms scatter no more than chance explains, df is Infinity and the
 * variance is the pooled one.
 */
export function fitVariancePrior(zones: readonly VariancePart[], floor = 0): VariancePrior & { readonly excessVariance: number } {
  const used = zones.filter((zone) => zone.df > 0).map((zone) => ({ df: zone.df, variance: Math.max(zone.variance, floor) }));
  if (used.length < 2) throw new AnalysisError('too_few_zones', `Comparing spreads needs at least 2 zones with repeated readings; got ${used.length}.`);
  if (used.some((zone) => !(zone.variance > 0))) {
    throw new AnalysisError('zero_spread', 'A zone has identical readings, so its spread is 0. Give the instrument resolution to plan with.');
  }
  const scores = used.map(({ df, variance }) => Math.log(variance) - digamma(df / 2) + Math.log(df / 2));
  const count = used.length;
  const centre = scores.reduce((sum, score) => sum + score, 0) / count;
  const scatter = scores.reduce((sum, score) => sum + (score - centre) ** 2, 0) / (count - 1);
  const expected = used.reduce((sum, { df }) => sum + trigamma(df / 2), 0) / count;
  const excessVariance = scatter - expected;
  if (excessVariance <= 0) return { variance: pooledVariance(used).variance, df: Infinity, excessVariance };
  const df = 2 * trigammaInverse(excessVariance);
  return { variance: Math.exp(centre + digamma(df / 2) - Math.log(df / 2)), df, excessVariance };
}
