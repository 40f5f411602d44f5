import type { Transaction } from 'objection';
import type { NewReading } from '../../../shared/contracts/readings.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';

/**
 * Finds the fresh readings that stand beside another of the same vine, measure and round, and opens one conflict a vine.
 * Both readings stay; a person decides. Returns the ids of the fresh readings concerned.
 */
export async function findConflicts(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<string[]> {
  const candidates = fresh.filter((reading) => reading.rowId !== null && reading.supersedes === null && reading.source !== 'lab');
  if (candidates.length === 0) return [];
  const { rows } = (await trx.raw(
    `select a.id as fresh_id, array_agg(b.id order by b.received_at, b.id) as others
     from readings a join readings b
       on b.estate_id = a.estate_id and b.row_id = a.row_id and b.ordinal = a.ordinal and b.measure_code = a.measure_code
      and b.round_id is not distinct from a.round_id and b.id <> a.id and b.excluded_reason is null
      and (a.round_id is not null or b.taken_at::date = a.taken_at::date)
      and not exists (select 1 from readings c where c.estate_id = b.estate_id and c.supersedes = b.id)
     where a.estate_id = ? and a.id = any(?) group by a.id`,
    [access.estateId, candidates.map((reading) => reading.id)],
  )) as { rows: { fresh_id: string; others: string[] }[] };
  const done = new Set<string>();
  for (const row of rows) {
    const ids = [row.fresh_id, ...row.others].sort();
    const key = ids.join();
    if (!done.has(key)) await openConflict(trx, access, ids);
    done.add(key);
  }
  return rows.map((row) => row.fresh_id);
}

async function openConflict(trx: Transaction, access: Access, readingIds: string[]): Promise<void> {
  const open = await ReadingConflict.query(trx).where({ estateId: access.estateId, state: 'open' }).whereRaw('reading_ids && ?::uuid[]', [readingIds]).first();
  if (open) await open.$query(trx).patch({ readingIds: [...new Set([...open.readingIds, ...readingIds])] });
  else await ReadingConflict.query(trx).insert({ estateId: access.estateId, kind: 'sameVine', readingIds });
}

export interface ConflictCard {
  id: string;
  kind: string;
  state: 'open' | 'settled';
  choice: string | null;
  readingIds: string[];
  createdAt: string;
}

export async function listConflicts(access: Access): Promise<ConflictCard[]> {
  const rows = await ReadingConflict.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(200);
  return rows.map((row) => ({ id: row.id, kind: row.kind, state: row.state, choice: row.choice, readingIds: row.readingIds, createdAt: row.createdAt.toISOString() }));
}

/** Settles a conflict: one is kept and the others left out with that reason, or all count. Nothing is deleted. */
export async function settleConflict(access: Access, conflictId: string, input: { choice: 'keepOne' | 'repeat' | 'bothReal'; keptReadingId: string | null }, now: Date): Promise<void> {
  await ReadingConflict.transaction(async (trx) => {
    const conflict = await ReadingConflict.query(trx).findOne({ estateId: access.estateId, id: conflictId }).forUpdate().throwIfNotFound();
    if (conflict.state === 'settled') throw new Clash('settled', 'This conflict was settled already.');
    if (input.choice === 'keepOne') {
      if (input.keptReadingId === null || !conflict.readingIds.includes(input.keptReadingId)) throw new Missing('Choose which of these readings stays.');
      await Reading.query(trx)
        .where({ estateId: access.estateId })
        .whereIn('id', conflict.readingIds)
        .whereNot({ id: input.keptReadingId })
        .patch({ excludedReason: 'Another reading of the same vine was kept.', excludedBy: access.personId });
    }
    await conflict.$query(trx).patch({ state: 'settled', choice: input.choice, keptReadingId: input.keptReadingId, settledBy: access.personId, settledAt: now });
    await writeAudit(trx, access, { action: 'conflicts.settle', subjectType: 'conflict', subjectId: conflictId, after: { ...input, readingIds: conflict.readingIds } });
  });
}
