import type { RipeningSeries, RipeningView } from '../../../shared/contracts/results.ts';
import { isoDay } from '../../lib/season.ts';
import type { ChartAxis, ChartSeries } from '../base/chartTypes.ts';

export type ShownMeasure = RipeningView['measures'][number];

const dayMs = 86_400_000;
export const dateOfDay = (day: number): string => isoDay(day * dayMs);
export const dayOfDate = (date: string): number => Math.round(Date.parse(`${date}T00:00:00Z`) / dayMs);

/** Sugar and acids first, as a winemaker reads them. */
const firstOrder = ['brix', 'ph', 'ta'];

/** What makes tonnes is counted once or twice, long before the fruit is followed: it would press all ripening into a corner of the time axis. */
const ofYield: readonly string[] = ['clusterCount', 'clusterWeight', 'berriesPerCluster', 'yieldPerVine', 'pruningWeight'];

/** Measures that are followed over time: sugar and acids always, other measures of fruit from their second visit on. */
export function followedMeasures({ measures, series }: RipeningView): ShownMeasure[] {
  const place = (code: string) => (firstOrder.includes(code) ? firstOrder.indexOf(code) : firstOrder.length);
  return measures
    .filter(({ code }) => series.some((one) => one.measure === code && (firstOrder.includes(code) || (one.points.length > 1 && !ofYield.includes(code)))))
    .sort((a, b) => place(a.code) - place(b.code) || a.code.localeCompare(b.code));
}

/** One time axis for all charts of the screen: from the first visit to the end of the longest forecast. */
export function timeAxis(series: readonly RipeningSeries[], text: (date: string) => string): ChartAxis {
  const days = series.flatMap((one) => [...one.points.map(({ day }) => day), ...one.forecast.map(({ day }) => day)]);
  const [low, high] = [Math.min(...days) - 1, Math.max(...days) + 1];
  const step = Math.max(7, Math.ceil((high - low) / 4 / 7) * 7);
  const ticks: number[] = [];
  for (let day = low + 1; day <= high; day += step) ticks.push(day);
  return { low, high, ticks, text: (day) => text(dateOfDay(day)) };
}

/** One value axis for a measure over all its zones, with four or five round ticks. */
export function valueAxis(series: readonly RipeningSeries[], how: { target: number | null; text: (value: number) => string }): ChartAxis {
  const ends = series.flatMap((one) => [...one.points.flatMap(({ value, halfWidth }) => [value - (halfWidth ?? 0), value + (halfWidth ?? 0)]), ...one.forecast.map(({ value }) => value)]);
  const all = how.target === null ? ends : [...ends, how.target];
  const [least, most] = [Math.min(...all), Math.max(...all)];
  const step = roundStep((most - least || 1) / 4);
  const [low, high] = [Math.floor(least / step) * step, Math.ceil(most / step) * step];
  const count = Math.round((high - low) / step);
  return { low, high, ticks: Array.from({ length: count + 1 }, (_, tick) => low + tick * step), text: how.text };
}

function roundStep(rough: number): number {
  const power = 10 ** Math.floor(Math.log10(rough));
  return [1, 2, 5, 10].map((factor) => factor * power).find((step) => step >= rough) ?? rough;
}

/** Measured line with its ribbon, and the hatched forecast from the newest visit on. */
export function chartSeries(series: RipeningSeries, words: { measured: string; forecast: string }): ChartSeries[] {
  const measured: ChartSeries = {
    id: 'measured', label: words.measured, look: 'measured',
    points: series.points.map(({ day, value, halfWidth }) => ({ x: day, y: value, ...(halfWidth === null ? {} : { low: value - halfWidth, high: value + halfWidth }) })),
  };
  if (series.forecast.length === 0) return [measured];
  return [measured, { id: 'forecast', label: words.forecast, look: 'forecast', points: series.forecast.map(({ day, value, lower, upper }) => ({ x: day, y: value, low: lower, high: upper })) }];
}
