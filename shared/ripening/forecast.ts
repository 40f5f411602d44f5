import { criticalT } from '../sampling/quantiles.ts';
import type { Trend } from './trend.ts';

/**
 * What a trend says of a later day, and of the day a target is reached. The band for a new visit is wider than that of
 * the line; dates come from inverse prediction with the limits of Fieller 1954 (J. R. Statist. Soc. B 16:175), which do
 * not exist while the slope cannot be told from level.
 */
export interface DayForecast {
  readonly day: number;
  readonly value: number;
  /** Where the line itself lies. */
  readonly line: { readonly lower: number; readonly upper: number };
  /** Where the mean of one more visit would lie. */
  readonly visit: { readonly lower: number; readonly upper: number };
  readonly daysBeyondLastVisit: number;
}

/** Example (visits as in `fitTrend`): day 30 → 24.240, line 23.966 to 24.515, visit 23.831 to 24.650. */
export function forecastDay(trend: Trend, day: number): DayForecast {
  const { meanDay, meanValue, slope, residualSd, visits, daySpread, confidence, df, lastDay } = trend;
  const value = meanValue + slope * (day - meanDay);
  const leverage = 1 / visits + (day - meanDay) ** 2 / daySpread;
  const t = criticalT(confidence, df) * residualSd;
  const around = (reach: number) => ({ lower: value - reach, upper: value + reach });
  return { day, value, line: around(t * Math.sqrt(leverage)), visit: around(t * Math.sqrt(1 + leverage)), daysBeyondLastVisit: day - lastDay };
}

export type TargetForecast =
  | {
      readonly kind: 'range';
      /** 'passed' when the line met the target between the first and the last visit. */
      readonly state: 'ahead' | 'passed';
      readonly day: number;
      readonly lower: number;
      readonly upper: number;
      readonly daysBeyondLastVisit: number;
    }
  /** 'leadsAway': the line met the target only before the first visit, if ever. */
  | { readonly kind: 'refused'; readonly reason: 'slopeNotClear' | 'leadsAway' | 'fewVisits' };

/**
 * A date range exists only when the slope is clear, and with three visits that happens mostly by luck: in simulation
 * such ranges at 95 % held the true day in 85 % of cases. With four visits they hold as they say.
 */
const VISITS_FOR_DATE = 4;

/**
 * Day on which the line meets the target. `of` chooses whose day: 'line' for the true mean, 'visit' for a visit that
 * would read the target (wider). Example: 24.5 °Brix → day 31.29, 29.93 to 32.83.
 */
export function forecastTarget(trend: Trend, target: number, { of = 'line' }: { readonly of?: 'line' | 'visit' } = {}): TargetForecast {
  const { meanDay, meanValue, slope, residualSd, visits, daySpread, confidence, df, firstDay, lastDay } = trend;
  if (visits < VISITS_FOR_DATE) return { kind: 'refused', reason: 'fewVisits' };
  const t2s2 = (criticalT(confidence, df) * residualSd) ** 2;
  // Fieller's g = t²s²/(b²Sxx) below 1 is the same as a slope interval that leaves 0 out.
  const clear = slope * slope - t2s2 / daySpread;
  if (!(clear > 0)) return { kind: 'refused', reason: 'slopeNotClear' };
  const gap = target - meanValue;
  const day = meanDay + gap / slope;
  if (day < firstDay) return { kind: 'refused', reason: 'leadsAway' };
  const scatter = 1 / visits + (of === 'visit' ? 1 : 0);
  const reach = Math.sqrt(t2s2 * ((gap * gap) / daySpread + clear * scatter));
  const limits = [(gap * slope - reach) / clear, (gap * slope + reach) / clear];
  return {
    kind: 'range',
    state: day > lastDay ? 'ahead' : 'passed',
    day,
    lower: meanDay + Math.min(...limits),
    upper: meanDay + Math.max(...limits),
    daysBeyondLastVisit: day - lastDay,
  };
}
