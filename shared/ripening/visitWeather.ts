import { dayDegrees, heatSeason } from './degreeDays.ts';
import type { WeatherDay } from './weatherTable.ts';

/** Days before a visit whose rain and heat stand beside its figures, the day itself included. */
const LOOK_BACK_DAYS = 2;
const dayMs = 86_400_000;

const dayNumber = (day: string): number => Math.round(Date.parse(`${day}T00:00:00Z`) / dayMs);

/** Rain added up and highest temperature over the visit's day and the two before; null where nothing was recorded. */
export function weatherBefore(days: readonly WeatherDay[], visit: string): { readonly rainMm: number | null; readonly maxC: number | null } {
  const last = dayNumber(visit);
  const near = days.filter(({ day }) => dayNumber(day) <= last && dayNumber(day) >= last - LOOK_BACK_DAYS);
  const rain = near.flatMap(({ rainMm }) => (rainMm === null ? [] : [rainMm]));
  const heat = near.flatMap(({ maxC }) => (maxC === null ? [] : [maxC]));
  return { rainMm: rain.length === 0 ? null : rain.reduce((sum, value) => sum + value, 0), maxC: heat.length === 0 ? null : Math.max(...heat) };
}

export interface HeatSum {
  /** °C·d above 10 °C over the days that are known. */
  readonly sum: number;
  readonly from: string;
  readonly to: string;
  readonly days: number;
  /** Days between that nobody recorded: the sum is too low by them. */
  readonly missing: number;
}

/** Heat since the season's customary first day (1 April, or 1 October in the south) to the newest day known; null without temperatures. */
export function heatSince(days: readonly WeatherDay[], how: { readonly south: boolean; readonly until: string }): HeatSum | null {
  const [month, first] = heatSeason(how.south ? -1 : 1).from;
  const startIn = (year: number) => `${year}-${String(month).padStart(2, '0')}-${String(first).padStart(2, '0')}`;
  const year = Number(how.until.slice(0, 4));
  const from = startIn(year) <= how.until ? startIn(year) : startIn(year - 1);
  const known = days.filter(({ day, maxC, minC }) => day >= from && day <= how.until && maxC !== null && minC !== null).sort((a, b) => a.day.localeCompare(b.day));
  const last = known.at(-1);
  if (last === undefined) return null;
  const sum = known.reduce((total, { maxC, minC }) => total + dayDegrees({ maxC: maxC!, minC: minC! }), 0);
  return { sum, from, to: last.day, days: known.length, missing: dayNumber(last.day) - dayNumber(from) + 1 - known.length };
}
