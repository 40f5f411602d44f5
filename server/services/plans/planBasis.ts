import type { Access } from '../../access/access.ts';
import type { BasisMeasure, PlanBasis } from '../../../shared/contracts/planBasis.ts';
import { paceChoices, type BasisChoices, type SpreadChoices } from '../../../shared/contracts/planChoices.ts';
import { estateSettings } from '../../../shared/contracts/estate.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { pilotReadingsOf } from '../../../shared/sampling/pilotReadings.ts';
import { vintageYear } from '../../../shared/season/seasonAround.ts';
import { spreadsOf } from '../../../shared/sampling/planBasis.ts';
import type { HistoryReading } from '../../../shared/sampling/pooling.ts';
import { pacedGround } from '../../../shared/sampling/terrain.ts';
import { trialWalks } from '../../../shared/sampling/walkEstimate.ts';
import { loadBlockVines, zonesOfVines } from '../../ground/blockVines.ts';
import { loadTerrain } from '../../ground/terrain.ts';
import { zonedReadings, type ZonedReading } from '../../ground/zonedReadings.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { Estate } from '../../models/Estate.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Plan } from '../../models/Plan.ts';
import { Round } from '../../models/Round.ts';
import { Season } from '../../models/Season.ts';
import { Target } from '../../models/Target.ts';
import { loadPlanGround, type PlanGround } from './planGround.ts';

const usualPace = paceChoices.parse({});
/** Other blocks are read only where a block's own history is too short to plan with. */
const enoughOwnReadings = 8;
const otherBlocksRead = 12;

/** The basis of a plan on a zoning, for the screen that answers while margins move. */
export async function planBasisOf(access: Access, zoningId: string, { spread, draw }: BasisChoices): Promise<PlanBasis> {
  return loadPlanBasis(access.estateId, await loadPlanGround(access.estateId, zoningId, draw), spread);
}

/** What is known when a plan is made on a zoning: zones, measures, and the spread of each with its source. */
export async function loadPlanBasis(estateId: string, planGround: PlanGround, how: SpreadChoices): Promise<PlanBasis> {
  const { zoning, ground, zoneOf, zones } = planGround;
  const [estate, seasons, measures] = await Promise.all([
    Estate.query().findById(estateId).throwIfNotFound(),
    Season.query().where({ estateId }),
    MeasureRecord.query().where({ estateId, inUse: true }).orderBy('code'),
  ]);
  const yearOf = new Map(seasons.map((season) => [season.id, vintageYear(season)]));
  const season = seasons.find(({ id }) => id === zoning.seasonId)!;
  const zoned = await zonedReadings(estateId, { ground, zoneOf });
  const own = historyOf(zoned, ground.block.id, yearOf);
  const pilot = await latestPilot(estateId, { blockId: ground.block.id, seasonId: season.id });
  const ofPilot = historyOf(zoned.filter(({ roundId }) => roundId !== null && pilot?.roundIds.has(roundId)), ground.block.id, yearOf);
  const isShort = measures.some(({ code }) => (own.get(code)?.length ?? 0) < enoughOwnReadings);
  const terrain = await loadTerrain(estateId, ground);
  const others = isShort ? await historyOfOtherBlocks(estateId, ground.block.id, yearOf) : new Map<string, HistoryReading[]>();
  const { floorVines, impracticalSamples, dayHours, costPerHour, currency, walkingKmPerHour, setUpSeconds } = estateSettings.parse(estate.settings);
  return {
    zoningId: zoning.id,
    zoningNumber: zoning.number,
    blockId: ground.block.id,
    blockName: ground.block.name,
    seasonId: season.id,
    seasonName: season.name,
    zones,
    measures: measures.map((measure) => basisMeasure(measure, {
      block: ground.block.id,
      zones: zones.map(({ number }) => String(number)),
      season: yearOf.get(season.id)!,
      readings: [...(own.get(measure.code) ?? []), ...(others.get(measure.code) ?? [])],
      ofPilot: ofPilot.get(measure.code) ?? [],
      how,
    })),
    pilot: pilot === null ? null : { planId: pilot.planId, name: pilot.name, vines: pilot.vines, read: new Set(zoned.filter(({ roundId }) => roundId !== null && pilot.roundIds.has(roundId)).map(({ vineKey }) => vineKey)).size },
    walks: trialWalks({ rows: ground.rows, table: ground.vines, vines: planGround.drawable, gateXY: planGround.gateXY, ...pacedGround(usualPace, terrain) }),
    isWalkLaid: false,
    settings: { floorVines, impracticalSamples, dayHours, costPerHour, currency, walkingKmPerHour, setUpSeconds },
  };
}

function basisMeasure(measure: MeasureRecord, history: { block: string; zones: string[]; season: number; readings: HistoryReading[]; ofPilot: HistoryReading[]; how: SpreadChoices }): BasisMeasure {
  const { code, name, unit, decimals, margin, marginKind, secondsPerSample, skewed, measuredIn, sampledUnit, rowSide, spreadKind, spreadValue, spreadSource, typicalMean } = measure;
  return {
    code, name, unit, decimals, margin, marginKind, secondsPerSample, skewed, measuredIn, sampledUnit, rowSide,
    confidence: measure.confidence as BasisMeasure['confidence'],
    tradeSource: spreadSource,
    spreads: spreadsOf({ ...history, tradeDefault: { kind: spreadKind, value: spreadValue }, typicalMean, resolution: 10 ** -decimals }),
    pilots: pilotReadingsOf(history.ofPilot, { zones: history.zones, kind: spreadKind, season: history.season }),
  };
}

/** The newest pilot of the block in the season that was sent to people. */
async function latestPilot(estateId: string, { blockId, seasonId }: { blockId: string; seasonId: string }): Promise<{ planId: string; name: string; vines: number; roundIds: Set<string> } | null> {
  const pilots = await Plan.query().where({ estateId, blockId, seasonId, isPilot: true }).orderBy('createdAt', 'desc').select('id', 'name');
  const rounds = await Round.query().where({ estateId, blockId }).whereIn('planId', pilots.map(({ id }) => id)).whereNot({ state: 'called off' }).select('id', 'planId');
  const pilot = pilots.find(({ id }) => rounds.some(({ planId }) => planId === id));
  if (!pilot) return null;
  const vines = await Target.query().where({ estateId, planId: pilot.id }).resultSize();
  return { planId: pilot.id, name: pilot.name, vines, roundIds: new Set(rounds.filter(({ planId }) => planId === pilot.id).map(({ id }) => id)) };
}

/** Readings by measure as spreads are pooled from them: one value a vine and visit, checked, in a zone, not left out. */
function historyOf(readings: ZonedReading[], block: string, yearOf: Map<string, number>): Map<string, HistoryReading[]> {
  const usable = readings.filter(({ zone, excludedReason, state }) => zone > 0 && excludedReason === null && state !== 'provisional');
  const perVine = groupBy(usable, ({ measureCode, visit, vineKey }) => `${measureCode}|${visit}|${vineKey}`);
  const history = new Map<string, HistoryReading[]>();
  for (const same of perVine.values()) {
    const { measureCode, zone, seasonId, visit } = same[0]!;
    const value = same.reduce((sum, reading) => sum + reading.value, 0) / same.length;
    history.set(measureCode, [...(history.get(measureCode) ?? []), { block, zone: String(zone), season: yearOf.get(seasonId)!, visit, value }]);
  }
  return history;
}

async function historyOfOtherBlocks(estateId: string, blockId: string, yearOf: Map<string, number>): Promise<Map<string, HistoryReading[]>> {
  const live = await zonesInForce(estateId).whereNot({ blockId }).whereNotNull('labels').orderBy('publishedAt', 'desc').limit(otherBlocksRead);
  const all = new Map<string, HistoryReading[]>();
  for (const zoning of live) {
    const ground = await loadBlockVines(estateId, zoning.blockId);
    const readings = await zonedReadings(estateId, { ground, zoneOf: zonesOfVines(ground, zoning) });
    for (const [code, list] of historyOf(readings, zoning.blockId, yearOf)) all.set(code, [...(all.get(code) ?? []), ...list]);
  }
  return all;
}
