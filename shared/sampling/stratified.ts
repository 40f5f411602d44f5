import { AnalysisError } from '../analysis/analysisError.ts';
import type { Estimate } from './precision.ts';

/**
 * Mean over several zones from a sample in each: ȳ = ΣW·ȳ_h, V = ΣW²(1 − n/N)s²/n, degrees of freedom after
 * Satterthwaite 1946. Source: Cochran 1977 ch. 5. A plain mean of all readings would lean towards the zones
 * that were sampled more.
 */
export interface ZoneSample {
  /** Vines for a mean per vine; tonnes would give a mean per mass (then leave `populationSize` to the vines). */
  readonly weight: number;
  readonly n: number;
  readonly mean: number;
  readonly variance: number;
  /** Vines in the zone; Infinity leaves the population correction out. Defaults to the weight. */
  readonly populationSize?: number;
}

/** Example: weights 900, 600, 300, means 22.4, 23.8, 21.0 → 22.633333 with standard error 0.194025 and 26.2 df. */
export function stratifiedEstimate(zones: readonly ZoneSample[]): Estimate {
  const total = zones.reduce((sum, zone) => sum + zone.weight, 0);
  if (!(total > 0)) throw new AnalysisError('no_weight', 'A mean over zones needs zones with vines in them; their weights add up to 0.');
  let value = 0;
  let variance = 0;
  let satterthwaite = 0;
  for (const zone of zones) {
    if (zone.weight === 0) continue;
    const share = zone.weight / total;
    const population = zone.populationSize ?? zone.weight;
    value += share * zone.mean;
    if (zone.n >= population) continue;
    const part = (share * share * (1 - zone.n / population) * zone.variance) / zone.n;
    variance += part;
    satterthwaite += (part * part) / (zone.n - 1);
  }
  const df = variance === 0 ? Infinity : (variance * variance) / satterthwaite;
  return { value, standardError: Math.sqrt(variance), df };
}
