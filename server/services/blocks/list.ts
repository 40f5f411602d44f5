import type { MultiPolygon } from 'geojson';
import { raw } from 'objection';
import type { BlockLine } from '../../../shared/contracts/blocks.ts';
import type { Access } from '../../access/access.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { Block } from '../../models/Block.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Estate } from '../../models/Estate.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { Zone } from '../../models/Zone.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import { restrictionsInForce } from './restrictions.ts';
import { vineTotals } from './vineCounts.ts';

/** The estate's blocks with what the ledger tells of each. One query a kind of fact, whatever the number of blocks. */
export async function listBlocks(access: Access, now: Date): Promise<BlockLine[]> {
  const { estateId } = access;
  const blocks = await Block.query().where({ estateId }).whereNull('retiredAt').orderBy('name').select('blocks.*', asGeoJson('boundary').as('boundary'));
  const ids = blocks.map((block) => block.id);
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  const [vines, zonings, lastReadings, rounds, restrictions, layers] = await Promise.all([
    vineTotals(estateId, ids),
    liveZonings(estateId, ids),
    lastReadingTimes(estateId, ids),
    nextRounds(estateId, ids, dayIn(timeZone, now)),
    restrictionsInForce(estateId, ids, now),
    layerTotals(estateId, ids),
  ]);
  return blocks.map((block) => {
    const { rows, vines: counts } = vines(block.id, block.census);
    return {
      id: block.id,
      name: block.name,
      variety: block.variety,
      areaHa: block.areaM2 / 10_000,
      rowBearingDeg: block.rowBearingDeg,
      rowSpacingM: block.rowSpacingM,
      cellSizeM: block.cellSizeM,
      rowTotal: rows,
      vines: counts,
      boundary: block.boundary as BlockLine['boundary'],
      zoning: zonings.get(block.id) ?? null,
      layerTotal: layers.get(block.id) ?? 0,
      lastReadingAt: lastReadings.get(block.id)?.toISOString() ?? null,
      nextRound: rounds.get(block.id) ?? null,
      ...restrictions(block.id),
      version: block.version,
    };
  });
}

async function liveZonings(estateId: string, blockIds: string[]): Promise<Map<string, NonNullable<BlockLine['zoning']>>> {
  const zonings = await zonesInForce(estateId)
    .whereIn('blockId', blockIds)
    .select('id', 'blockId', 'name', 'revision');
  const zones = await Zone.query()
    .where({ estateId })
    .whereIn('zoningId', zonings.map((zoning) => zoning.id))
    .orderBy('number')
    .select('id', 'zoningId', 'number', 'name', 'colour', 'areaM2', asGeoJson('geometry', 7).as('geometry'));
  return new Map(
    zonings.map(({ id, blockId, name, revision }) => [
      blockId,
      {
        id,
        name,
        revision,
        zones: zones
          .filter((zone) => zone.zoningId === id)
          .map((zone) => ({ id: zone.id, number: zone.number, name: zone.name, colour: zone.colour, areaHa: zone.areaM2 / 10_000, geometry: zone.geometry as MultiPolygon as never })),
      },
    ]),
  );
}

async function lastReadingTimes(estateId: string, blockIds: string[]): Promise<Map<string, Date>> {
  const rows = (await Reading.query().where({ estateId }).whereIn('blockId', blockIds).groupBy('blockId').select('blockId').max('takenAt as last')) as unknown as { blockId: string; last: Date }[];
  return new Map(rows.map((row) => [row.blockId, row.last]));
}

async function nextRounds(estateId: string, blockIds: string[], today: string): Promise<Map<string, NonNullable<BlockLine['nextRound']>>> {
  const rows = await Round.query()
    .where({ estateId })
    .whereIn('blockId', blockIds)
    .whereIn('state', ['sent', 'open'])
    .distinctOn('blockId')
    .orderBy([{ column: 'blockId' }, { column: 'onDate' }])
    .select('id', 'blockId', 'onDate', 'state');
  return new Map(rows.map(({ blockId, id, onDate, state }) => [blockId, { id, onDate, state, late: onDate < today }]));
}

async function layerTotals(estateId: string, blockIds: string[]): Promise<Map<string, number>> {
  const rows = (await BlockLayer.query()
    .alias('b')
    .joinRaw('join layers l on l.estate_id = b.estate_id and l.id = b.layer_id and l.retired_at is null')
    .where('b.estateId', estateId)
    .whereIn('b.blockId', blockIds)
    .groupBy('b.blockId')
    .select('b.blockId', raw('count(*)::int as total'))) as unknown as { blockId: string; total: number }[];
  return new Map(rows.map((row) => [row.blockId, row.total]));
}
