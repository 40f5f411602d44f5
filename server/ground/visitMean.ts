import { groupBy } from '../../shared/groupBy.ts';
import { meanEstimate, type Estimate } from '../../shared/sampling/precision.ts';
import { sdAboveRounding, summarise } from '../../shared/sampling/variances.ts';
import type { ZonedReading } from './zonedReadings.ts';

/** Mean of a zone on one visit. */
export interface VisitMean {
  visit: string;
  n: number;
  mean: number;
  /** NaN with one vine; never less than what rounding hides. */
  sd: number;
  estimate: Estimate;
}

/**
 * One value a vine (two readings of a vine on one visit are repeats), then their mean with the finite population
 * correction. Equal values do not say that vines do not differ: see `sdAboveRounding`.
 */
export function visitMean(readings: readonly ZonedReading[], { bearing, decimals }: { bearing: number; decimals: number }): VisitMean {
  const perVine = [...groupBy(readings, (reading) => reading.vineKey).values()].map((same) => same.reduce((sum, reading) => sum + reading.value, 0) / same.length);
  const { n, mean, sd: seen } = summarise(perVine);
  const sd = sdAboveRounding(seen, 10 ** -decimals);
  return { visit: readings[0]!.visit, n, mean, sd, estimate: meanEstimate({ n, mean, sd, populationSize: Math.max(bearing || Infinity, n) }) };
}
