import type { RipeningSeries, RipeningView, VisitChange, ZoneResult } from '../../../shared/contracts/results.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { backTestSteps, type BackTestStep } from '../../../shared/ripening/backTest.ts';
import { findBend } from '../../../shared/ripening/bend.ts';
import { forecastDay } from '../../../shared/ripening/forecast.ts';
import { fitTrend, type Trend, type VisitPoint } from '../../../shared/ripening/trend.ts';
import { changeBetween, changeOfSameVines, type Change } from '../../../shared/sampling/change.ts';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import type { ZonedReading } from '../../ground/zonedReadings.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Zoning } from '../../models/Zoning.ts';
import { loadZoneReadings, viewResults } from './zoneResults.ts';

/** How far ahead a forecast is drawn. */
const forecastDays = 14;
const forecastStep = 2;
const fewSteps = 5;
/** Two visits count as visits to the same vines when so large a part of each was read on both. */
const sameShare = 0.8;
const leastPairs = 3;

/** How each zone of a block ripens by the zones in force: series, change in words, trend and a forecast that carries its record. */
export async function blockRipening(access: Access, blockId: string): Promise<RipeningView> {
  const zoning = await Zoning.query().where({ estateId: access.estateId, blockId, state: 'live' }).orderBy('publishedAt', 'desc').first();
  if (!zoning) throw new Missing('This block has no zones in force. Publish its zones first; ripeness is followed by zone.');
  const loaded = await loadZoneReadings(access, zoning.id);
  const results = viewResults(loaded);
  const made = loaded.measures.flatMap((measure) =>
    results.zones.map((zone) => seriesOf(measure, { zone: zone.number, values: results.values, readings: loaded.readings })).filter((made) => made !== null),
  );
  return { ...results, series: made.map(({ series }) => series), record: recordsOf(made), degreeDays: null };
}

interface Made {
  series: RipeningSeries;
  steps: BackTestStep[];
}

function seriesOf(measure: MeasureRecord, facts: { zone: number; values: ZoneResult[]; readings: ZonedReading[] }): Made | null {
  const own = facts.values.filter((value) => value.zone === facts.zone && value.measure === measure.code).sort((a, b) => a.visit.localeCompare(b.visit));
  if (own.length === 0) return null;
  const readings = facts.readings.filter((reading) => reading.zone === facts.zone && reading.measureCode === measure.code && reading.excludedReason === null);
  const points = own.map((value): VisitPoint => ({ day: dayOf(value.visit), value: value.mean }));
  const options = { confidence: measure.confidence, resolution: 10 ** -measure.decimals };
  const trend = fitTrend(points, options);
  const bend = findBend(points, measure.confidence);
  return {
    series: {
      zone: facts.zone,
      measure: measure.code,
      points: own.map((value) => ({ visit: value.visit, day: dayOf(value.visit), value: value.mean, halfWidth: value.halfWidth, n: value.n })),
      change: changeSince(own, readings),
      trend: trend.kind === 'trend' ? { ...trend, rSquared: Number.isNaN(trend.rSquared) ? null : trend.rSquared } : trend,
      bend: bend.kind === 'bend' ? bend.word : null,
      forecast: trend.kind === 'trend' ? band(trend) : [],
      sd: own.at(-1)!.sd,
    },
    steps: backTestSteps(points, options),
  };
}

/** From the visit before to the newest; paired when mostly the same vines were read, else between two independent means. */
function changeSince(own: ZoneResult[], readings: ZonedReading[]): VisitChange | null {
  const [before, after] = own.slice(-2);
  if (before === undefined || after === undefined) return null;
  const [first, second] = [valuesByVine(readings, before.visit), valuesByVine(readings, after.visit)];
  const common = [...first.keys()].filter((vine) => second.has(vine));
  const sameVines = common.length >= leastPairs && common.length >= sameShare * Math.max(first.size, second.size);
  const change = sameVines
    ? changeOfSameVines(common.map((vine) => first.get(vine)!), common.map((vine) => second.get(vine)!), after.confidence)
    : betweenMeans(before, after);
  return { from: before.visit, sameVines, value: change.value, halfWidth: Number.isNaN(change.halfWidth) ? null : change.halfWidth, word: change.word };
}

function betweenMeans(before: ZoneResult, after: ZoneResult): Change {
  const estimate = ({ mean, standardError, df }: ZoneResult) => ({ value: mean, standardError: standardError ?? Number.NaN, df: df ?? (standardError === null ? 0 : Infinity) });
  return changeBetween(estimate(before), estimate(after), after.confidence);
}

function valuesByVine(readings: ZonedReading[], visit: string): Map<string, number> {
  const groups = groupBy(readings.filter((reading) => reading.visit === visit), (reading) => reading.vineKey);
  return new Map([...groups].map(([vine, same]) => [vine, same.reduce((sum, { value }) => sum + value, 0) / same.length]));
}

function band(trend: Trend): RipeningSeries['forecast'] {
  return Array.from({ length: forecastDays / forecastStep + 1 }, (_, step) => {
    const { day, value, visit } = forecastDay(trend, trend.lastDay + step * forecastStep);
    return { day, value, lower: visit.lower, upper: visit.upper };
  });
}

function recordsOf(made: Made[]): RipeningView['record'] {
  return [...groupBy(made, ({ series }) => series.measure)].map(([measure, group]) => {
    const steps = group.flatMap((one) => one.steps);
    const better = steps.filter((step) => Math.abs(step.actual - step.forecast) < Math.abs(step.actual - step.noChange)).length;
    return { measure, n: steps.length, better, held: steps.filter((step) => step.held).length, few: steps.length < fewSteps };
  });
}

const dayMs = 86_400_000;

function dayOf(visit: string): number {
  return Math.round(Date.parse(`${visit}T00:00:00Z`) / dayMs);
}
