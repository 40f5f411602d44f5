import { groupBy } from '../../../shared/groupBy.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { BlockResult, MeasuredMean, ResultsView, TogetherResult, ZoneResult } from '../../../shared/contracts/results.ts';
import { howManyMore, intervalOf, type Estimate } from '../../../shared/sampling/precision.ts';
import { stratifiedEstimate } from '../../../shared/sampling/stratified.ts';
import type { Access } from '../../access/access.ts';
import { isBearing, loadBlockVines, loadBlockVinesAt, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadMeasures } from '../../ground/measuresAt.ts';
import { visitMean, type VisitMean } from '../../ground/visitMean.ts';
import { zonedReadings, type ZonedReading } from '../../ground/zonedReadings.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Plan } from '../../models/Plan.ts';
import { Round } from '../../models/Round.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';

/**
 * What the readings of a season say of each zone: mean and range a measure and visit, and how many readings are missing.
 * Readings belong to vines; which zone a vine is in follows from the zoning asked for, so history stays true when zones change.
 */
export async function zoneResults(access: Access, zoningId: string, options: { seasonId?: string } = {}): Promise<ResultsView> {
  return viewResults(await loadZoneReadings(access, zoningId, options));
}

export interface ZoneReadings {
  zoning: Zoning;
  ground: BlockVines;
  zones: Pick<Zone, 'id' | 'number' | 'name' | 'areaM2'>[];
  zoneOf: Uint8Array;
  /** Measures that were read at all. */
  measures: MeasureRecord[];
  readings: ZonedReading[];
  /** Bearing vines by zone number. */
  bearing: Map<number, number>;
  /** Zones that the plan of a round sampled as one, by round. */
  poolsOfRound: Map<string, number[][]>;
}

/** Everything the results of a zoning are computed from. */
export async function loadZoneReadings(access: Access, zoningId: string, options: { seasonId?: string; until?: Date } = {}): Promise<ZoneReadings> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const ground = options.until ? await loadBlockVinesAt(access.estateId, zoning.blockId, options.until) : await loadBlockVines(access.estateId, zoning.blockId);
  const zoneOf = zonesOfVines(ground, zoning);
  const zones = await Zone.query().where({ estateId: access.estateId, zoningId }).orderBy('number').select('id', 'number', 'name', 'areaM2');
  const measures = await loadMeasures(access.estateId, options.until ?? null);
  const readings = await zonedReadings(access.estateId, { ground, zoneOf, seasonId: options.seasonId ?? zoning.seasonId, ...(options.until ? { until: options.until } : {}) });
  const measured = measures.filter((measure) => readings.some((reading) => reading.measureCode === measure.code));
  return { zoning, ground, zones, zoneOf, measures: measured, readings, bearing: countBearing(ground, zoneOf), poolsOfRound: await poolsOfRounds(access.estateId, zoning) };
}

/** Only of plans on these very zones: numbers of another zoning mean other vines. */
async function poolsOfRounds(estateId: string, zoning: Zoning): Promise<Map<string, number[][]>> {
  const plans = await Plan.query().where({ estateId, zoningId: zoning.id }).select('id', 'options');
  const pooled = new Map(plans.map(({ id, options }) => [id, planChoices.parse(options).pools] as const).filter(([, pools]) => pools.length > 0));
  const rounds = pooled.size === 0 ? [] : await Round.query().where({ estateId }).whereIn('planId', [...pooled.keys()]).select('id', 'planId');
  return new Map(rounds.map(({ id, planId }) => [id, pooled.get(planId)!]));
}

export function viewResults({ zoning, ground, zones, zoneOf, measures: measured, readings, bearing, poolsOfRound }: ZoneReadings): ResultsView {
  const inZones = readings.filter((reading) => reading.zone > 0);
  const values = measured.flatMap((measure) => resultsOf(measure, inZones.filter((reading) => reading.measureCode === measure.code), bearing));
  return {
    zoningId: zoning.id,
    blockId: zoning.blockId,
    blockName: ground.block.name,
    zoningNumber: zoning.number,
    zones: zones.map((zone) => ({ id: zone.id, number: zone.number, name: zone.name, areaHa: zone.areaM2 / 10_000, vines: count(zoneOf, zone.number), bearing: bearing.get(zone.number) ?? 0 })),
    measures: measured.map(({ code, name, unit, decimals, marginKind, margin, confidence, secondsPerSample }) => ({ code, name, unit, decimals, marginKind, margin, confidence, secondsPerSample })),
    visits: visitsOf(inZones),
    values,
    together: measured.flatMap((measure) => togetherOf(measure, inZones.filter((reading) => reading.measureCode === measure.code), { bearing, poolsOfRound })),
    block: blockResults(values, bearing),
    outside: readings.length - inZones.length,
  };
}

function resultsOf(measure: MeasureRecord, readings: ZonedReading[], bearing: Map<number, number>): ZoneResult[] {
  const groups = groupBy(readings, (reading) => `${reading.zone}|${reading.visit}`);
  return [...groups.values()].flatMap((group) => {
    const { zone } = group[0]!;
    const result = resultOfVisit(measure, group, bearing.get(zone) ?? Infinity);
    return result ? [{ zone, ...result }] : [];
  });
}

/** Zones sampled as one, visit by visit, from the readings of the rounds that sampled them so. */
function togetherOf(measure: MeasureRecord, readings: ZonedReading[], { bearing, poolsOfRound }: Pick<ZoneReadings, 'bearing' | 'poolsOfRound'>): TogetherResult[] {
  const pooled = readings.flatMap((reading) => {
    const zones = poolsOfRound.get(reading.roundId ?? '')?.find((pool) => pool.includes(reading.zone));
    return zones ? [{ zones, reading }] : [];
  });
  return [...groupBy(pooled, ({ zones, reading }) => `${zones.join('+')}|${reading.visit}`).values()].flatMap((group) => {
    const { zones } = group[0]!;
    const result = resultOfVisit(measure, group.map(({ reading }) => reading), zones.reduce((sum, zone) => sum + (bearing.get(zone) ?? 0), 0) || Infinity);
    return result ? [{ zones, ...result }] : [];
  });
}

function resultOfVisit(measure: MeasureRecord, readings: ZonedReading[], bearingHere: number): Omit<ZoneResult, 'zone'> | null {
  const counted = readings.filter((reading) => reading.excludedReason === null);
  if (counted.length === 0) return null;
  const mean = meanOf(visitMean(counted, { bearing: bearingHere, decimals: measure.decimals }), measure.confidence);
  const populationSize = Math.max(bearingHere, mean.n);
  const margin = measure.marginKind === 'absolute' ? measure.margin : Math.abs(mean.mean) * measure.margin;
  const missing = mean.sd === null || !(margin > 0) ? null : howManyMore({ n: mean.n, spread: mean.sd, margin, confidence: measure.confidence, populationSize });
  return {
    ...mean,
    measure: measure.code,
    visit: counted[0]!.visit,
    margin,
    enough: missing?.enough ?? false,
    more: missing?.more ?? null,
    provisional: counted.filter((reading) => reading.state === 'provisional').length,
    isFinal: counted.every((reading) => reading.state === 'final'),
    leftOut: readings.length - counted.length,
  };
}

function meanOf({ n, mean, sd, estimate }: VisitMean, confidence: number): MeasuredMean {
  return { n, mean, sd: n < 2 ? null : sd, confidence, ...rangeOf(estimate, confidence) };
}

function rangeOf(estimate: Estimate, confidence: number): Pick<MeasuredMean, 'halfWidth' | 'standardError' | 'df'> {
  const { halfWidth, standardError, df } = intervalOf(estimate, confidence);
  const known = !Number.isNaN(halfWidth);
  return { halfWidth: known ? halfWidth : null, standardError: known ? standardError : null, df: known && Number.isFinite(df) ? df : null };
}

/** The block's mean over its zones by bearing vines (stratified), where at least two readings a zone say something of the spread. */
function blockResults(values: ZoneResult[], bearing: Map<number, number>): BlockResult[] {
  return [...groupBy(values, (value) => `${value.measure}|${value.visit}`).values()].map((group) => {
    const told = group.filter((value) => value.n > 0);
    const estimate = stratifiedEstimate(told.map((value) => ({ weight: bearing.get(value.zone) ?? 0, n: value.n, mean: value.mean, variance: value.sd === null ? Number.NaN : value.sd ** 2 })));
    const zonesWithout = [...bearing.keys()].filter((zone) => !told.some((value) => value.zone === zone));
    return { measure: group[0]!.measure, visit: group[0]!.visit, n: told.reduce((sum, value) => sum + value.n, 0), mean: estimate.value, sd: null, confidence: group[0]!.confidence, zonesWithout, ...rangeOf(estimate, group[0]!.confidence) };
  });
}

function visitsOf(readings: ZonedReading[]): ResultsView['visits'] {
  return [...groupBy(readings, (reading) => reading.visit).entries()]
    .map(([key, group]) => ({ key, on: key, roundIds: [...new Set(group.flatMap((reading) => (reading.roundId ? [reading.roundId] : [])))], seasonId: group[0]!.seasonId }))
    .sort((a, b) => a.on.localeCompare(b.on));
}

function countBearing(ground: BlockVines, zoneOf: Uint8Array): Map<number, number> {
  const counts = new Map<number, number>();
  zoneOf.forEach((zone, vine) => {
    if (zone > 0 && isBearing(ground.states[vine]!)) counts.set(zone, (counts.get(zone) ?? 0) + 1);
  });
  return counts;
}

function count(zoneOf: Uint8Array, zone: number): number {
  return zoneOf.reduce((sum, of) => sum + (of === zone ? 1 : 0), 0);
}
