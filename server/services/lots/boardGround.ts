import type { TransactionOrKnex } from 'objection';
import type { BrixMethod } from '../../../shared/contracts/lots.ts';
import { vineIndex } from '../../../shared/geo/vines.ts';
import { loadBlockVines, loadBlockVinesAt, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadMeasures } from '../../ground/measuresAt.ts';
import { loadSettings } from '../../ground/settingsAt.ts';
import { zonedReadings, type ZonedReading } from '../../ground/zonedReadings.ts';
import { Lot } from '../../models/Lot.ts';
import { LotPart } from '../../models/LotPart.ts';
import { LotRowRun } from '../../models/LotRowRun.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Season } from '../../models/Season.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';
import type { LotsThen } from './lotsThen.ts';
import { zoneOutlooks, type UsedFactors, type ZoneOutlook } from './zoneOutlook.ts';

/** A block with its live zones, what to expect of them, and which lot each vine is in. */
export interface BoardBlock {
  ground: BlockVines;
  zoneOf: Uint8Array;
  zones: Zone[];
  outlooks: ZoneOutlook[];
  /** Of the season. */
  readings: ZonedReading[];
  /** Per vine: index into `lots`, or -1 while free. */
  lotOf: Int16Array;
}

export interface BoardGround {
  season: Season;
  lots: Lot[];
  blocks: BoardBlock[];
  factors: UsedFactors;
  alcoholMethod: BrixMethod;
  measures: MeasureRecord[];
}

/** The lots as they stood at a moment. */
export interface Then {
  until: Date;
  stood: LotsThen;
}

/** Loads everything that the lots of a scenario are made of: each live zoning of the season, its fruit and the lots' vines; with `then` all of it as it stood and was known. */
export async function loadBoardGround(estateId: string, scenario: { id: string; seasonId: string }, factors: UsedFactors, then: Then | null = null): Promise<BoardGround> {
  const season = await Season.query().findOne({ estateId, id: scenario.seasonId }).throwIfNotFound();
  const zonings = await zoningsOf(estateId, season.id, then?.until ?? null);
  const zones = await Zone.query().where({ estateId }).whereIn('zoningId', zonings.map((zoning) => zoning.id)).orderBy('number').select('id', 'zoningId', 'number', 'name', 'areaM2');
  const measures = await loadMeasures(estateId, then?.until ?? null);
  const lots = then?.stood.lots ?? (await Lot.query().where({ estateId, scenarioId: scenario.id }).orderBy('createdAt'));
  const runs = then?.stood.runs ?? (await runsOf(estateId, scenario.id));
  const blocks = await Promise.all(
    zonings.map(async (zoning): Promise<BoardBlock> => {
      const ground = then ? await loadBlockVinesAt(estateId, zoning.blockId, then.until) : await loadBlockVines(estateId, zoning.blockId);
      const zoneOf = zonesOfVines(ground, zoning);
      const own = zones.filter((zone) => zone.zoningId === zoning.id);
      const readings = await zonedReadings(estateId, { ground, zoneOf, seasonId: season.id, ...(then ? { until: then.until } : {}) });
      const outlooks = zoneOutlooks({ ground, zoneOf, zoneNumbers: own.map((zone) => zone.number), readings, measures, season, factors });
      return { ground, zoneOf, zones: own, outlooks, readings, lotOf: lotsOfVines(ground, lots, runs) };
    }),
  );
  blocks.sort((a, b) => a.ground.block.name.localeCompare(b.ground.block.name, undefined, { numeric: true }));
  return { season, lots, blocks, factors, measures, alcoholMethod: (await loadSettings(estateId, then?.until ?? null)).alcoholMethod };
}

/** Zones in force, one set a block: now, or at a moment. */
async function zoningsOf(estateId: string, seasonId: string, until: Date | null): Promise<Zoning[]> {
  if (until === null) return Zoning.query().where({ estateId, seasonId, state: 'live' });
  return Zoning.query().where({ estateId, seasonId }).where('publishedAt', '<=', until).distinctOn('blockId').orderBy(['blockId', { column: 'publishedAt', order: 'desc' }]);
}

/** Runs of vines of a row that are in a lot, both ends included. */
export interface Run {
  lotId: string;
  rowId: string;
  from: number;
  to: number;
}

/** Runs of vines of all lots of a scenario, both ends included. */
export async function runsOf(estateId: string, scenarioId: string, trx?: TransactionOrKnex): Promise<Run[]> {
  return (await LotRowRun.query(trx)
    .where('lot_row_runs.estateId', estateId)
    .where('lot_row_runs.scenarioId', scenarioId)
    .join(`${LotPart.tableName} as part`, 'part.id', 'lot_row_runs.lotPartId')
    .select('part.lotId', 'lot_row_runs.rowId', LotRowRun.raw('lower(lot_row_runs.vines) as "from"'), LotRowRun.raw('upper(lot_row_runs.vines) - 1 as "to"'))) as unknown as Run[];
}

function lotsOfVines(ground: BlockVines, lots: Lot[], runs: Run[]): Int16Array {
  const lotOf = new Int16Array(ground.vines.count).fill(-1);
  const indexOf = new Map(lots.map((lot, index) => [lot.id, index]));
  for (const run of runs) {
    const row = ground.rowIndexOf.get(run.rowId);
    if (row === undefined) continue;
    for (let ordinal = run.from; ordinal <= run.to; ordinal++) {
      const vine = vineIndex(ground.vines, row, ordinal);
      if (vine >= 0) lotOf[vine] = indexOf.get(run.lotId) ?? -1;
    }
  }
  return lotOf;
}
