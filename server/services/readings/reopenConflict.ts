import { randomUUID } from 'node:crypto';
import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { AuditEntry, writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { say } from '../../sentences/say.ts';
import { conflictPlace } from './conflictPlace.ts';
import { newestReadings } from './newestReadings.ts';
import { leftOutReasons, openForSettling, type Settled } from './settleConflict.ts';

/**
 * Takes a mistaken answer back: what was left out counts again, marks go, counter-records get counter-records on the vines
 * before. Both deeds stay in the history. What somebody changed since stays as they left it.
 */
export async function reopenConflict(access: Access, conflictId: string, now: Date): Promise<void> {
  await ReadingConflict.transaction(async (trx) => {
    const { conflict, readings } = await openForSettling(trx, access, conflictId);
    if (conflict.state !== 'settled') throw new Clash('open', say('conflictOpen'));
    const { choice, settledBy, settledAt } = conflict;
    const entry = await AuditEntry.query(trx).where({ estateId: access.estateId, action: 'conflicts.settle', subjectId: conflictId }).orderBy('id', 'desc').first();
    const done = (entry?.after as { done?: Settled } | undefined)?.done;
    if (!done) throw new Clash('settledBefore', say('conflictSettledBefore'));
    const { subjectName, at } = await conflictPlace(trx, conflict, readings);
    const takenIn = await takeIn(trx, access, done);
    await unmark(trx, access, done);
    await moveBack(trx, access, { done, now });
    await conflict.$query(trx).patch({ state: 'open', choice: null, keptReadingId: null, settledBy: null, settledAt: null });
    await writeAudit(trx, access, { action: 'conflicts.reopen', subjectType: 'conflict', subjectId: conflictId, subjectName, before: { choice, settledBy, settledAt }, after: { at, takenIn } });
  });
}

/** Those that this conflict left out and that are left out for that reason still, with it: the history names both. */
async function takeIn(trx: Transaction, { estateId }: Access, { leftOut = [] }: Settled): Promise<{ id: string; reason: string }[]> {
  const rows = await Reading.query(trx).where({ estateId }).whereIn('id', leftOut).whereIn('excludedReason', Object.values(leftOutReasons));
  await Reading.query(trx).where({ estateId }).whereIn('id', rows.map(({ id }) => id)).patch({ excludedReason: null, excludedBy: null });
  return rows.map(({ id, excludedReason }) => ({ id, reason: excludedReason! }));
}

async function unmark(trx: Transaction, { estateId }: Access, { flagged = [], flag }: Settled): Promise<void> {
  if (flag === undefined) return;
  await trx.raw('update readings set flags = flags - ?::text where estate_id = ? and id = any(?)', [flag, estateId, [...flagged]]);
}

async function moveBack(trx: Transaction, { estateId, personId }: Access, { done: { moved = [] }, now }: { done: Settled; now: Date }): Promise<void> {
  const chains = await newestReadings(estateId, moved, trx);
  const records = new Map((await Reading.query(trx).where({ estateId }).whereIn('id', moved)).map((reading) => [reading.id, reading]));
  const origins = new Map((await Reading.query(trx).where({ estateId }).whereIn('id', [...records.values()].flatMap(({ supersedes }) => supersedes ?? []))).map((reading) => [reading.id, reading]));
  for (const [id, newest] of chains) {
    const { rowId, ordinal, targetId } = origins.get(records.get(id)!.supersedes!)!;
    for (const reading of newest) await Reading.query(trx).insert({ ...reading, id: randomUUID(), rowId, ordinal, targetId, position: null, supersedes: reading.id, typedBy: personId, receivedAt: now });
  }
}
