import type { TransactionOrKnex } from 'objection';
import type { BlockView, BlockWarning } from '../../../shared/contracts/blocks.ts';
import type { Access } from '../../access/access.ts';
import { Block } from '../../models/Block.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { bookWarning } from './outlines.ts';
import { restrictionsInForce } from './restrictions.ts';
import { vineTotals } from './vineCounts.ts';

/** A block of this estate that is not retired, geometry as GeoJSON. */
export async function findBlock(access: Access, blockId: string, trx?: TransactionOrKnex): Promise<Block> {
  return Block.query(trx)
    .findOne({ estateId: access.estateId, id: blockId })
    .whereNull('retiredAt')
    .select('blocks.*', asGeoJson('boundary').as('boundary'), asGeoJson('gate').as('gate'))
    .throwIfNotFound();
}

/** Everything about one block. `noticed` adds what a change has just brought to light. */
export async function viewBlock(access: Access, blockId: string, options: { now: Date; trx?: TransactionOrKnex; noticed?: BlockWarning[] }): Promise<BlockView> {
  const block = await findBlock(access, blockId, options.trx);
  const totals = (await vineTotals(access.estateId, [blockId], options.trx))(blockId, block.census);
  const inForce = (await restrictionsInForce(access.estateId, [blockId], options.now))(blockId);
  const warnings = options.noticed ?? [...bookWarning(block.bookAreaHa, block.areaM2), ...(totals.rows === 0 ? [{ code: 'noRows' as const }] : [])];
  return {
    id: block.id,
    name: block.name,
    variety: block.variety,
    rootstock: block.rootstock,
    plantedYear: block.plantedYear,
    bookAreaHa: block.bookAreaHa,
    withoutRows: block.withoutRows,
    rowBearingDeg: block.rowBearingDeg,
    rowSpacingM: block.rowSpacingM,
    vineSpacingM: block.vineSpacingM,
    rowCount: block.rowCount,
    headlandM: block.headlandM,
    rowOneSide: block.rowOneSide,
    vineOneEnd: block.vineOneEnd,
    firstRowLabel: block.firstRowLabel,
    startPostColour: block.startPostColour,
    endPostColour: block.endPostColour,
    gate: block.gate as BlockView['gate'],
    cellSizeM: block.cellSizeM,
    trellis: block.trellis,
    notes: block.notes,
    boundary: block.boundary as BlockView['boundary'],
    areaHa: block.areaM2 / 10_000,
    epsg: block.epsg,
    gridKey: block.gridKey,
    rowTotal: totals.rows,
    vines: totals.vines,
    ...inForce,
    version: block.version,
    createdAt: block.createdAt.toISOString(),
    warnings,
  };
}
