import type { Transaction } from 'objection';
import { may } from '../../../shared/catalog/permissions.ts';
import type { CensusChange, CensusOutcome, CensusMark } from '../../../shared/contracts/rows.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { vineOrdinal } from '../../../shared/geo/numbering.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { firstOrdinal } from '../../../shared/geo/vines.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { Access } from '../../access/access.ts';
import { NotAllowed, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { eraseVines, Vine, writeVines, type VineRecord } from '../../models/Vine.ts';
import { readCensusTable } from './censusTable.ts';
import { findBlock } from './view.ts';
import { vineTotals } from './vineCounts.ts';
import { say } from '../../sentences/say.ts';

/** Writes what stands in the places of a block. Crew propose; the mark of somebody who may decide takes a proposal over. */
export async function changeCensus(access: Access, blockId: string, change: CensusChange, now: Date): Promise<CensusOutcome> {
  const decides = may(access.roles, 'census.edit');
  if (change.complete && !decides) throw new NotAllowed(say('censusWhole'));
  const where = { estateId: access.estateId, blockId };
  const done = await Block.transaction(async (trx) => {
    const block = await findBlock(access, blockId, trx);
    const marks = await marksOf(trx, block, change);
    const last = [...new Map(marks.map((mark) => [`${mark.rowId} ${mark.ordinal}`, mark])).values()];
    if (change.complete) await Vine.query(trx).where(where).delete();
    const living = last.filter((mark) => mark.state === 'living');
    const erased = await eraseVines(trx, where, living, { proposedOnly: !decides });
    const records = last.flatMap(({ rowId, ordinal, state }): VineRecord[] => (state === 'living' ? [] : [{ rowId, ordinal, state, proposed: !decides, notedBy: access.personId, notedAt: now }]));
    const written = await writeVines(trx, where, records);
    const census = change.complete ? 'full' : decides && block.census === 'unknown' && written > 0 ? 'partial' : block.census;
    if (decides) await Block.query(trx).where({ estateId: access.estateId, id: blockId }).patch({ census, censusAt: now });
    await writeAudit(trx, access, {
      action: decides ? 'census.change' : 'census.propose',
      subjectType: 'block',
      subjectId: blockId,
      subjectName: block.name,
      after: { marks: last.length, complete: change.complete, states: Object.fromEntries([...groupBy(last, (mark) => mark.state)].map(([state, list]) => [state, list.length])) },
    });
    return { census, changed: written + erased, skipped: records.length - written };
  });
  return { counts: (await vineTotals(access.estateId, [blockId]))(blockId, done.census).vines, changed: done.changed, skipped: done.skipped };
}

async function marksOf(trx: Transaction, block: Block, change: CensusChange): Promise<CensusMark[]> {
  const stored = await BlockRow.query(trx).where({ estateId: block.estateId, blockId: block.id }).whereNull('retiredAt').orderBy('ordinal');
  const { rows } = rowsFromStored({ boundary: block.boundary.coordinates as unknown as MultiPolygonLonLat, rowBearingDeg: block.rowBearingDeg, epsg: block.epsg }, stored);
  if (change.table !== undefined) {
    return readCensusTable(change.table, rows.map((row, at) => ({ rowId: stored[at]!.id, label: stored[at]!.label, vineCount: row.vineCount, ordinalOf: (vine) => vineOrdinal(row, vine, block.vineOneEnd) })));
  }
  const places = new Map(rows.map((row, at) => [stored[at]!.id, { first: firstOrdinal(row), count: row.vineCount, label: stored[at]!.label }]));
  for (const { rowId, ordinal } of change.marks ?? []) {
    const place = places.get(rowId);
    if (!place) throw new Unusable('noSuchRow', say('noSuchRow', { row: rowId, block: block.name }));
    if (ordinal < place.first || ordinal >= place.first + place.count) throw new Unusable('noSuchVine', say('noSuchPlace', { row: place.label, block: block.name, place: ordinal }));
  }
  return change.marks ?? [];
}
