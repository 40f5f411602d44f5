import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * Heat summation above 10 °C, no upper cut-off: each day (or month) counts from 0, never below it. Sums of hours come
 * out lower than sums of days, and monthly ones lower still in the edge months, so they must not be mixed.
 * Source: Winkler et al. 1974, General Viticulture; class limits in °C as commonly printed.
 */
const BASE_TEMPERATURE_C = 10;

export interface DayTemperatures {
  readonly maxC: number;
  readonly minC: number;
}

export function dayDegrees({ maxC, minC }: DayTemperatures, baseC = BASE_TEMPERATURE_C): number {
  if (minC > maxC) throw new AnalysisError('temperatures_swapped', `The day's minimum ${minC} °C is above its maximum ${maxC} °C. Check the columns.`);
  return Math.max(0, (maxC + minC) / 2 - baseC);
}

/** Example: 21.5/7.5 24/10 18/6 12.5/4.5 9/1 30/14 33.5/16.5 → 40.5 °C·d. A missing day must be filled or left out by the caller. */
export function degreeDays(days: readonly DayTemperatures[], baseC = BASE_TEMPERATURE_C): number {
  return days.reduce((sum, day) => sum + dayDegrees(day, baseC), 0);
}

export interface MonthTemperature {
  readonly meanC: number;
  readonly days: number;
}

/** Example: April to October 12.1 14.8 18.6 21.0 20.7 18.2 14.0 → 1512.5 °C·d. */
export function monthlyDegreeDays(months: readonly MonthTemperature[], baseC = BASE_TEMPERATURE_C): number {
  return months.reduce((sum, { meanC, days }) => sum + Math.max(0, meanC - baseC) * days, 0);
}

/** First and last day of the season, month and day, northern or southern half of the globe. */
export function heatSeason(latitudeDeg: number): { readonly from: readonly [month: number, day: number]; readonly to: readonly [month: number, day: number] } {
  return latitudeDeg >= 0 ? { from: [4, 1], to: [10, 31] } : { from: [10, 1], to: [4, 30] };
}

const heatRegions = [
  { id: 'tooCool', from: -Infinity },
  { id: 'Ia', from: 850 },
  { id: 'Ib', from: 1111 },
  { id: 'II', from: 1389 },
  { id: 'III', from: 1667 },
  { id: 'IV', from: 1944 },
  { id: 'V', from: 2222 },
  { id: 'tooHot', from: 2700 },
] as const;

export type HeatRegion = (typeof heatRegions)[number]['id'];

/** Class of a whole season's sum; a class holds from its lower limit up. */
export function heatRegion(seasonSum: number): HeatRegion {
  return heatRegions.findLast(({ from }) => seasonSum >= from)!.id;
}
