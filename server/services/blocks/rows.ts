import { may } from '../../../shared/catalog/permissions.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { numberingFromTap, renumberRows } from '../../../shared/geo/numbering.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { BlockRowsView, Numbering, NumberingChange } from '../../../shared/contracts/rows.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { BlockRow, relabelBlockRows } from '../../models/BlockRow.ts';
import { Person } from '../../models/Person.ts';
import { Vine } from '../../models/Vine.ts';
import { lockBlock } from './change.ts';
import { findBlock } from './view.ts';
import { vineTotals } from './vineCounts.ts';
import { say } from '../../sentences/say.ts';

/** Rows of a block in order across the block, with pieces, labels and the vines that are known. */
export async function listRows(access: Access, blockId: string): Promise<BlockRowsView> {
  const block = await findBlock(access, blockId);
  const where = { estateId: access.estateId, blockId };
  const rows = await BlockRow.query().where(where).whereNull('retiredAt').orderBy('ordinal').select('id', 'ordinal', 'label', 'labelWas', 'vineCount', 'pieces');
  const vines = await Vine.query().where(where).orderBy('ordinal').select('rowId', 'ordinal', 'state', 'proposed', 'notedBy', 'notedAt');
  const noted = await notedOf(access, vines);
  const known = groupBy(vines, (vine) => vine.rowId);
  return {
    items: rows.map(({ id, ordinal, label, labelWas, vineCount, pieces }) => ({
      id, ordinal, label, labelWas, vineCount, pieces,
      vines: (known.get(id) ?? []).map((vine) => ({ ordinal: vine.ordinal, state: vine.state, proposed: vine.proposed, ...noted(vine) })),
    })),
    total: rows.length,
    numbering: { rowOneSide: block.rowOneSide, vineOneEnd: block.vineOneEnd, firstRowLabel: block.firstRowLabel },
    counts: (await vineTotals(access.estateId, [blockId]))(blockId, block.census).vines,
    version: block.version,
  };
}

/** Who found what a proposal says, for whoever takes it over. */
async function notedOf(access: Access, vines: readonly Vine[]): Promise<(vine: Vine) => { noted?: { by: string; at: string } }> {
  const proposals = may(access.roles, 'census.edit') ? vines.filter(({ proposed }) => proposed) : [];
  if (proposals.length === 0) return () => ({});
  const people = await Person.query().findByIds([...new Set(proposals.flatMap(({ notedBy }) => notedBy ?? []))]).select('id', 'name');
  const nameOf = new Map(people.map(({ id, name }) => [id, name]));
  return ({ proposed, notedBy, notedAt }) => (proposed ? { noted: { by: nameOf.get(notedBy ?? '') ?? '', at: notedAt.toISOString() } } : {});
}

/** Gives rows and vines new numbers. Identities stay, so that everything measured stays on its vine. */
export async function renumber(access: Access, blockId: string, change: NumberingChange, made: { version: number; now: Date }): Promise<BlockRowsView> {
  await Block.transaction(async (trx) => {
    const block = await lockBlock(trx, access, blockId, made);
    const rows = await BlockRow.query(trx).where({ estateId: access.estateId, blockId }).whereNull('retiredAt').orderBy('ordinal');
    const before: Numbering = { rowOneSide: block.rowOneSide, vineOneEnd: block.vineOneEnd, firstRowLabel: block.firstRowLabel };
    const after = { ...before, ...cornerOf(block, rows, change), ...given(change) };
    await Block.query(trx).where({ estateId: access.estateId, id: blockId }).patch({ ...after, version: block.version + 1 });
    const labels = renumberRows(rows.map(({ id, label }) => ({ rowId: id, label })), after.rowOneSide, after.firstRowLabel);
    await relabelBlockRows(trx, access.estateId, labels.map(({ rowId, label, was }, at) => ({ rowId, label, labelWas: was ?? rows[at]!.labelWas })));
    await writeAudit(trx, access, { action: 'rows.renumber', subjectType: 'block', subjectId: blockId, subjectName: block.name, before, after });
  });
  return listRows(access, blockId);
}

function cornerOf(block: Block, rows: BlockRow[], change: NumberingChange): Partial<Numbering> {
  if (change.corner === undefined) return {};
  const laid = rowsFromStored({ boundary: block.boundary.coordinates as unknown as MultiPolygonLonLat, rowBearingDeg: block.rowBearingDeg, epsg: block.epsg }, rows);
  const corner = numberingFromTap(laid, toUtm(change.corner, block.epsg));
  if (corner === null) throw new Unusable('noRows', say('noRowsToNumber', { block: block.name }));
  return corner;
}

function given({ rowOneSide, vineOneEnd, firstRowLabel }: NumberingChange): Partial<Numbering> {
  return { ...(rowOneSide ? { rowOneSide } : {}), ...(vineOneEnd ? { vineOneEnd } : {}), ...(firstRowLabel === undefined ? {} : { firstRowLabel }) };
}
