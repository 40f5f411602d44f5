import { smallestDetectableChange, vinesToSeeChange } from '../sampling/change.ts';
import { forecastDay, type DayForecast } from './forecast.ts';
import type { Trend } from './trend.ts';

/**
 * "Tuesday or Friday": is the difference that a few days will make larger than what samples can tell apart?
 * The difference comes from the slope; what can be told from the spread between bags and their number.
 */
export interface TwoDays {
  readonly trend: Trend;
  readonly dayA: number;
  readonly dayB: number;
  /** Spread between bags (or vines) at one visit, in the measure's unit. */
  readonly bagSd: number;
  readonly bagsPerVisit: number;
  /** Vines in the zone or bags that could be taken: more is not asked for. */
  readonly mostBags?: number;
}

export interface TwoDaysAnswer {
  readonly days: readonly [DayForecast, DayForecast];
  /** Expected change from A to B with its limits from the slope. */
  readonly difference: number;
  readonly lower: number;
  readonly upper: number;
  /** Smallest change that this many bags on each day would tell from none. */
  readonly detectable: number;
  /** 'yes' when the bags would show the expected difference; 'no' when not; 'slopeNotClear' when there may be none. */
  readonly answer: 'yes' | 'no' | 'slopeNotClear';
  /** Bags on each day that would show the expected difference; null when more than there are, or no difference to see. */
  readonly bagsNeeded: number | null;
}

export function tellDaysApart({ trend, dayA, dayB, bagSd, bagsPerVisit, mostBags = Infinity }: TwoDays): TwoDaysAnswer {
  const apart = dayB - dayA;
  const difference = trend.slope * apart;
  const limits = [trend.slopeLower * apart, trend.slopeUpper * apart];
  const question = { sd: bagSd, vines: 'new', confidence: trend.confidence } as const;
  const detectable = smallestDetectableChange({ ...question, n: bagsPerVisit });
  const slopeIsClear = trend.word !== 'notDistinguishable' && apart !== 0;
  const bags = slopeIsClear && bagSd > 0 ? vinesToSeeChange({ ...question, change: Math.abs(difference) }) : null;
  return {
    days: [forecastDay(trend, dayA), forecastDay(trend, dayB)],
    difference,
    lower: Math.min(...limits),
    upper: Math.max(...limits),
    detectable,
    answer: slopeIsClear ? (detectable <= Math.abs(difference) ? 'yes' : 'no') : 'slopeNotClear',
    bagsNeeded: bags !== null && bags <= mostBags ? bags : null,
  };
}
