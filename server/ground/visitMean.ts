import { groupBy } from '../../shared/groupBy.ts';
import { meanEstimate, type Estimate } from '../../shared/sampling/precision.ts';
import { summarise } from '../../shared/sampling/variances.ts';
import type { ZonedReading } from './zonedReadings.ts';

/** Mean of a zone on one visit. */
export interface VisitMean {
  visit: string;
  n: number;
  mean: number;
  /** NaN with one vine. */
  sd: number;
  estimate: Estimate;
}

/** One value a vine (two readings of a vine on one visit are repeats), then their mean with the finite population correction. */
export function visitMean(readings: readonly ZonedReading[], bearingVines: number): VisitMean {
  const perVine = [...groupBy(readings, (reading) => reading.vineKey).values()].map((same) => same.reduce((sum, reading) => sum + reading.value, 0) / same.length);
  const { n, mean, sd } = summarise(perVine);
  return { visit: readings[0]!.visit, n, mean, sd, estimate: meanEstimate({ n, mean, sd, populationSize: Math.max(bearingVines || Infinity, n) }) };
}
