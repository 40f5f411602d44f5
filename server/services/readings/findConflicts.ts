import type { Transaction } from 'objection';
import type { ConflictKind } from '../../../shared/contracts/conflicts.ts';
import type { NewReading } from '../../../shared/contracts/readings.ts';
import type { Access } from '../../access/access.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { vineWords } from '../plans/viewPlan.ts';

/**
 * Opens conflicts for what fresh readings stand beside: another reading of the vine, a second vine for the target, zones
 * that were replaced, a row that is called otherwise now. Everything stays; a person decides.
 * Returns the ids of the fresh readings that meet another reading.
 */
export async function findConflicts(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<string[]> {
  const leftOut = new Set((await Reading.query(trx).where({ estateId: access.estateId }).whereIn('id', fresh.flatMap(({ supersedes }) => supersedes ?? [])).whereNotNull('excludedReason').select('id')).map(({ id }) => id));
  // A correction stands for what it corrects: it is looked at only when both come together, or when what it corrects was
  // left out meanwhile and it would count beside what was kept.
  const onVines = fresh.filter(({ rowId, supersedes, source }) => rowId !== null && source !== 'lab' && (supersedes === null || leftOut.has(supersedes) || fresh.some(({ id }) => id === supersedes)));
  if (onVines.length === 0) return [];
  await findOldZones(trx, access, onVines);
  await findRenumbered(trx, access, onVines);
  return findTwice(trx, access, onVines);
}

/** A reading counts while nothing corrects it and nobody left it out. */
const stillCounts = 'b.excluded_reason is null and not exists (select 1 from readings c where c.estate_id = b.estate_id and c.supersedes = b.id)';

/** What its own correction came with is no second reading. */
const notCorrected = 'not exists (select 1 from readings d where d.estate_id = a.estate_id and d.supersedes = a.id)';

async function findTwice(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<string[]> {
  const ids = fresh.map(({ id }) => id);
  const { rows } = (await trx.raw(
    `select a.id as fresh_id, 'sameVine' as kind, array_agg(b.id order by b.received_at, b.id) as others
     from readings a join estates e on e.id = a.estate_id join readings b
       on b.estate_id = a.estate_id and b.row_id = a.row_id and b.ordinal = a.ordinal and b.measure_code = a.measure_code
      and b.round_id is not distinct from a.round_id and b.id <> a.id and (a.round_id is not null or (b.taken_at at time zone e.time_zone)::date = (a.taken_at at time zone e.time_zone)::date) and ${stillCounts}
     where a.estate_id = :estateId and a.id = any(:ids) and ${notCorrected} group by a.id
     union all
     select a.id, 'sameTarget', array_agg(b.id order by b.received_at, b.id)
     from readings a join readings b
       on b.estate_id = a.estate_id and b.round_id = a.round_id and b.target_id = a.target_id and b.measure_code = a.measure_code
      and (b.row_id, b.ordinal) is distinct from (a.row_id, a.ordinal) and b.id <> a.id and ${stillCounts}
     where a.estate_id = :estateId and a.id = any(:ids) and ${notCorrected} group by a.id`,
    { estateId: access.estateId, ids },
  )) as { rows: { fresh_id: string; kind: ConflictKind; others: string[] }[] };
  const byId = new Map(fresh.map((reading) => [reading.id, reading]));
  const done = new Set<string>();
  for (const row of rows) {
    const readingIds = [row.fresh_id, ...row.others].sort();
    const { blockId, roundId } = byId.get(row.fresh_id)!;
    if (!done.has(readingIds.join())) await openTwice(trx, access, { kind: row.kind, readingIds, blockId, roundId });
    done.add(readingIds.join());
  }
  return rows.map((row) => row.fresh_id);
}

type NewConflict = Pick<ReadingConflict, 'kind' | 'readingIds' | 'blockId' | 'roundId'>;

/** One open card a vine, however many people read it. */
async function openTwice(trx: Transaction, access: Access, conflict: NewConflict): Promise<void> {
  const open = await ReadingConflict.query(trx).where({ estateId: access.estateId, state: 'open' }).whereIn('kind', ['sameVine', 'sameTarget']).whereRaw('reading_ids && ?::uuid[]', [conflict.readingIds]).first();
  if (open) await open.$query(trx).patch({ readingIds: [...new Set([...open.readingIds, ...conflict.readingIds])] });
  else await ReadingConflict.query(trx).insert({ estateId: access.estateId, ...conflict });
}

/** One open card a round, however many readings come late. */
async function openOfRound(trx: Transaction, access: Access, conflict: NewConflict): Promise<void> {
  const { kind, blockId, roundId } = conflict;
  const open = await ReadingConflict.query(trx).findOne({ estateId: access.estateId, state: 'open', kind, blockId, roundId });
  if (open) await open.$query(trx).patch({ readingIds: [...new Set([...open.readingIds, ...conflict.readingIds])] });
  else await ReadingConflict.query(trx).insert({ estateId: access.estateId, ...conflict });
}

async function findOldZones(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<void> {
  const roundIds = [...new Set(fresh.flatMap(({ roundId }) => (roundId === null ? [] : [roundId])))];
  const { rows } = (await trx.raw(
    `select r.id as round_id, r.block_id from rounds r
     join plans p on p.estate_id = r.estate_id and p.id = r.plan_id
     join zonings z on z.estate_id = p.estate_id and z.id = p.zoning_id and z.state = 'retired'
     where r.estate_id = ? and r.id = any(?)`,
    [access.estateId, roundIds],
  )) as { rows: { round_id: string; block_id: string }[] };
  for (const { round_id: roundId, block_id: blockId } of rows) {
    await openOfRound(trx, access, { kind: 'oldZones', blockId, roundId, readingIds: fresh.filter((reading) => reading.roundId === roundId).map(({ id }) => id) });
  }
}

async function findRenumbered(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<void> {
  for (const blockId of new Set(fresh.filter(({ seenAs }) => seenAs !== null).map((reading) => reading.blockId))) {
    const ground = await loadBlockVines(access.estateId, blockId, trx);
    // Vines without rows are found by their coordinates, which no new numbers move.
    if (ground.block.withoutRows) continue;
    const other = fresh.filter((reading) => {
      if (reading.blockId !== blockId || reading.seenAs === null || reading.rowId === null || reading.ordinal === null) return false;
      const { rowLabel, vineNumber } = vineWords(ground, reading.rowId, reading.ordinal);
      return rowLabel !== reading.seenAs.row || vineNumber !== reading.seenAs.vine;
    });
    for (const roundId of new Set(other.map((reading) => reading.roundId))) {
      await openOfRound(trx, access, { kind: 'renumbered', blockId, roundId, readingIds: other.filter((reading) => reading.roundId === roundId).map(({ id }) => id) });
    }
  }
}
