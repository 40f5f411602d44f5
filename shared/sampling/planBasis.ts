import type { BasisSpread } from '../contracts/planBasis.ts';
import type { SpreadChoices } from '../contracts/planChoices.ts';
import type { Spread } from './margins.ts';
import { planSpread } from './planSpread.ts';
import type { HistoryReading } from './pooling.ts';

/** What is known of one measure when a plan is made. */
export interface MeasureHistory {
  readonly block: string;
  /** Zone numbers as text, in the order of the plan. */
  readonly zones: readonly string[];
  readonly season: number;
  readonly readings: readonly HistoryReading[];
  readonly tradeDefault: Spread;
  readonly typicalMean: number;
  /** Step of the instrument. */
  readonly resolution: number;
  readonly how: SpreadChoices;
}

/** Spread and expected mean of a measure in each zone with their sources, as a plan stores and shows them. */
export function spreadsOf(history: MeasureHistory): BasisSpread[] {
  const { block, zones, season, readings, tradeDefault, typicalMean, resolution, how } = history;
  const isOwnMean = readings.some((reading) => reading.block === block);
  return planSpread({ block, zones, season, readings, tradeDefault, typicalMean, options: { ...how, resolution } }).map((zone) => ({
    kind: zone.spread.kind,
    value: zone.spread.value,
    cautious: zone.planningSpread.value,
    source: zone.source,
    n: zone.n,
    seasons: [...zone.seasons],
    df: zone.df === null || !Number.isFinite(zone.df) ? null : zone.df,
    outliers: zone.outliers,
    withOutliers: zone.ownWithOutliers?.spread ?? null,
    withoutOutliers: zone.ownWithoutOutliers?.spread ?? null,
    expectedMean: zone.expectedMean,
    isMeanAssumed: !isOwnMean,
  }));
}
