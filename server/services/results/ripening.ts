import type { RipeningSeries, RipeningView, VisitChange, ZoneResult } from '../../../shared/contracts/results.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { backTestSteps, type BackTestStep } from '../../../shared/ripening/backTest.ts';
import { findBend } from '../../../shared/ripening/bend.ts';
import { forecastDay } from '../../../shared/ripening/forecast.ts';
import { loadingChange } from '../../../shared/ripening/sugarPerBerry.ts';
import { visitFlags } from '../../../shared/ripening/visitFlags.ts';
import { heatSince, weatherBefore } from '../../../shared/ripening/visitWeather.ts';
import type { WeatherDay } from '../../../shared/ripening/weatherTable.ts';
import { fitTrend, type Trend } from '../../../shared/ripening/trend.ts';
import { changeBetween, changeOfSameVines, type Change } from '../../../shared/sampling/change.ts';
import type { Estimate } from '../../../shared/sampling/precision.ts';
import type { Access } from '../../access/access.ts';
import { censusKnownFrom } from '../../ground/blockVines.ts';
import { endOfEstateDay } from '../../ground/estateDay.ts';
import { loadSettings } from '../../ground/settingsAt.ts';
import { isFirm, type ZonedReading } from '../../ground/zonedReadings.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';
import { WeatherDayRecord } from '../../models/WeatherDayRecord.ts';
import { weatherAt } from '../../models/WeatherHistory.ts';
import { isSeasonOver, seasonOfBlock, seasonsOfBlock } from './seasonOfBlock.ts';
import { loadZoneReadings, viewResults } from './zoneResults.ts';

/** How far ahead a forecast is drawn. */
const forecastDays = 14;
const forecastStep = 2;
const fewSteps = 5;
/** Two visits count as visits to the same vines when so large a part of each was read on both. */
const sameShare = 0.8;
const leastPairs = 3;

interface RipeningOptions {
  today: string;
  knownOn?: string | null;
  unchecked?: 'out' | 'in';
  /** Null for the season of the zones in force. */
  seasonId?: string | null;
}

/**
 * How each zone of a block ripens by the zones in force: series, change in words, trend and a forecast that carries its
 * record. With `knownOn` as it stood at the end of that day: its zones, and what had been received by then. An earlier
 * season is read by the zones it had, or by those of now when it had none; nothing is forecast for one that is over.
 * Figures of the lab that nobody has checked stay out unless they are asked for; how many there are is told.
 */
export async function blockRipening(access: Access, blockId: string, options: RipeningOptions): Promise<RipeningView> {
  const until = options.knownOn ? await endOfEstateDay(access.estateId, options.knownOn) : null;
  const { season, zoning, zonesFrom } = await seasonOfBlock(access.estateId, blockId, { seasonId: options.seasonId ?? null, until });
  const all = await loadZoneReadings(access, zoning.id, { seasonId: season.id, ...(until ? { until } : {}) });
  const basis = options.unchecked ?? 'out';
  const loaded = basis === 'in' ? all : { ...all, readings: all.readings.filter(({ state }) => state !== 'provisional') };
  const results = viewResults(loaded);
  const weather = await weatherUntil(access.estateId, until);
  // Nothing is known of days ahead.
  const shownOn = options.knownOn && options.knownOn < options.today ? options.knownOn : options.today;
  const { costPerHour, currency, alcoholMethod } = await loadSettings(access.estateId, until);
  const isOver = await isSeasonOver(access.estateId, season, shownOn);
  const made = loaded.measures.flatMap((measure) =>
    results.zones.map((zone) => seriesOf(measure, { zone: zone.number, values: results.values, readings: loaded.readings, isOver })).filter((made) => made !== null),
  );
  return {
    ...results,
    season: { id: season.id, name: season.name, startsOn: season.startsOn, endsOn: season.endsOn, isOver, zonesFrom },
    seasons: await seasonsOfBlock(access.estateId, blockId),
    series: made.map(({ series }) => series),
    record: recordsOf(made),
    settings: { costPerHour, currency, alcoholMethod },
    knownOn: options.knownOn ?? null,
    censusFrom: await censusKnownFrom(access.estateId, [loaded.ground.block], until),
    unchecked: { basis, n: all.readings.filter((reading) => reading.zone > 0 && reading.excludedReason === null && !isFirm(reading)).length },
    conditions: results.visits.map(({ on }) => conditionsOf(on, loaded.readings, weather)),
    heat: heatSince(weather, { south: loaded.ground.block.epsg >= firstSouthernZone, until: isOver && season.endsOn < shownOn ? season.endsOn : shownOn }),
    loading: results.zones.flatMap((zone) => loadingOf(zone.number, results) ?? []),
  };
}

/** UTM zones of the southern half are numbered from 32701 on. */
const firstSouthernZone = 32_700;

async function weatherUntil(estateId: string, until: Date | null): Promise<WeatherDay[]> {
  return until === null ? WeatherDayRecord.query().where({ estateId }).orderBy('day') : weatherAt(estateId, until);
}

function conditionsOf(visit: string, readings: readonly ZonedReading[], weather: readonly WeatherDay[]): RipeningView['conditions'][number] {
  const own = readings.filter((reading) => reading.visit === visit && reading.excludedReason === null);
  const wetReadings = own.filter(({ wetFruit }) => wetFruit).length;
  const before = weatherBefore(weather, visit);
  return { visit, ...before, wetReadings, flags: visitFlags({ ...before, wetFruit: wetReadings > 0 }) };
}

/** What happened to the sugar in a berry between the last two visits that weighed berries and measured sugar. */
function loadingOf(zone: number, { values }: { values: readonly ZoneResult[] }): RipeningView['loading'][number] | null {
  const of = (measure: string, visit: string) => values.find((value) => value.zone === zone && value.measure === measure && value.visit === visit) ?? null;
  const both = [...new Set(values.map(({ visit }) => visit))].sort().filter((visit) => of('brix', visit) !== null && of('berryWeight', visit) !== null);
  const [from, to] = both.slice(-2);
  if (from === undefined || to === undefined) return null;
  const state = (visit: string) => ({ brix: asEstimate(of('brix', visit)!), berryWeightG: asEstimate(of('berryWeight', visit)!) });
  const { confidence } = of('brix', to)!;
  const change = loadingChange(state(from), state(to), confidence);
  const told = (half: number) => (Number.isNaN(half) ? null : half);
  return {
    zone,
    from,
    to,
    word: change.word,
    confidence,
    sugarMg: change.sugarMg.value,
    sugarHalfWidth: told(change.sugarMg.halfWidth),
    brix: change.brix.value,
    brixHalfWidth: told(change.brix.halfWidth),
    berryWeightG: change.berryWeightG.value,
    berryWeightHalfWidth: told(change.berryWeightG.halfWidth),
  };
}

interface Made {
  series: RipeningSeries;
  steps: BackTestStep[];
}

function seriesOf(measure: MeasureRecord, facts: { zone: number; values: ZoneResult[]; readings: ZonedReading[]; isOver: boolean }): Made | null {
  const own = facts.values.filter((value) => value.zone === facts.zone && value.measure === measure.code).sort((a, b) => a.visit.localeCompare(b.visit));
  if (own.length === 0) return null;
  const readings = facts.readings.filter((reading) => reading.zone === facts.zone && reading.measureCode === measure.code && reading.excludedReason === null);
  const taken = own.map((value) => ({ day: dayOf(value.visit), value: value.mean, protocol: protocolOf(readings, value.visit) }));
  // Bags of berries and single vines need not read alike: the line is drawn through visits taken as the newest was.
  const points = taken.filter(({ protocol }) => protocol === taken.at(-1)!.protocol);
  const options = { confidence: measure.confidence, resolution: 10 ** -measure.decimals };
  const trend = fitTrend(points, options);
  const bend = findBend(points, measure.confidence);
  return {
    series: {
      zone: facts.zone,
      measure: measure.code,
      points: own.map((value) => ({ visit: value.visit, day: dayOf(value.visit), value: value.mean, halfWidth: value.halfWidth, n: value.n, provisional: value.provisional, isFinal: value.isFinal })),
      change: changeSince(own, readings, options.resolution),
      trend: trend.kind === 'trend' ? { ...trend, rSquared: Number.isNaN(trend.rSquared) ? null : trend.rSquared } : trend,
      bend: bend.kind === 'bend' ? bend.word : null,
      forecast: trend.kind === 'trend' && !facts.isOver ? band(trend) : [],
      otherWay: taken.length - points.length,
      sd: own.at(-1)!.sd,
    },
    steps: backTestSteps(points, options),
  };
}

/** How most of a visit's figures were taken. */
function protocolOf(readings: readonly ZonedReading[], visit: string): 'bags' | 'vines' {
  const own = readings.filter((reading) => reading.visit === visit);
  return own.filter(({ vineKey }) => vineKey.startsWith('bag ')).length * 2 > own.length ? 'bags' : 'vines';
}

/** From the visit before to the newest; paired when mostly the same vines were read, else between two independent means. */
function changeSince(own: ZoneResult[], readings: ZonedReading[], step: number): VisitChange | null {
  const [before, after] = own.slice(-2);
  if (before === undefined || after === undefined) return null;
  const [first, second] = [valuesByVine(readings, before.visit), valuesByVine(readings, after.visit)];
  const common = [...first.keys()].filter((vine) => second.has(vine));
  const sameVines = common.length >= leastPairs && common.length >= sameShare * Math.max(first.size, second.size);
  const change = sameVines
    ? changeOfSameVines(common.map((vine) => first.get(vine)!), common.map((vine) => second.get(vine)!), after.confidence, step)
    : betweenMeans(before, after);
  return { from: before.visit, sameVines, value: change.value, halfWidth: Number.isNaN(change.halfWidth) ? null : change.halfWidth, word: change.word };
}

function betweenMeans(before: ZoneResult, after: ZoneResult): Change {
  return changeBetween(asEstimate(before), asEstimate(after), after.confidence);
}

function asEstimate({ mean, standardError, df }: ZoneResult): Estimate {
  return { value: mean, standardError: standardError ?? Number.NaN, df: df ?? (standardError === null ? 0 : Infinity) };
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
