import { randomUUID } from 'node:crypto';
import type { Transaction } from 'objection';
import { answersTo, type ConflictChoice } from '../../../shared/contracts/conflicts.ts';
import { vineOrdinal } from '../../../shared/geo/numbering.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing, NotAllowed, Unusable } from '../../errors.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { settlesAll } from './listConflicts.ts';
import { say } from '../../sentences/say.ts';

/** Settles a conflict as a person says. Readings are left out, marked or corrected by counter-records; nothing is deleted. */
export async function settleConflict(access: Access, conflictId: string, input: ConflictChoice, now: Date): Promise<void> {
  await ReadingConflict.transaction(async (trx) => {
    const conflict = await ReadingConflict.query(trx).findOne({ estateId: access.estateId, id: conflictId }).forUpdate().throwIfNotFound();
    const readings = await Reading.query(trx).where({ estateId: access.estateId }).whereIn('id', conflict.readingIds).orderBy('takenAt').orderBy('id');
    if (!settlesAll(access) && readings.some(({ personId }) => personId !== access.personId)) throw new NotAllowed(say('readingsOfOthers'));
    if (conflict.state === 'settled') throw new Clash('settled', say('conflictSettled'));
    if (!answersTo[conflict.kind].includes(input.choice)) throw new Unusable('noSuchAnswer', say('noSuchAnswer', { choice: input.choice, choices: answersTo[conflict.kind].join(', ') }));
    await actions[input.choice](trx, { access, readings, keptReadingId: input.keptReadingId, now });
    await conflict.$query(trx).patch({ state: 'settled', choice: input.choice, keptReadingId: input.keptReadingId, settledBy: access.personId, settledAt: now });
    await writeAudit(trx, access, { action: 'conflicts.settle', subjectType: 'conflict', subjectId: conflictId, after: { ...input, kind: conflict.kind, readingIds: conflict.readingIds } });
  });
}

interface Settling {
  access: Access;
  readings: readonly Reading[];
  keptReadingId: string | null;
  now: Date;
}

const actions: Record<ConflictChoice['choice'], (trx: Transaction, settling: Settling) => Promise<void>> = {
  keepOne: async (trx, { access, readings, keptReadingId }) => {
    if (!readings.some(({ id }) => id === keptReadingId)) throw new Missing(say('chooseReading'));
    await leaveOut(trx, access, readings.filter(({ id }) => id !== keptReadingId), 'Another reading of the same vine was kept.');
  },
  repeat: (trx, { access, readings }) => mark(trx, access, { readings: readings.slice(1), flag: 'repeat' }),
  bothReal: (trx, { access, readings }) => mark(trx, access, { readings: readings.slice(1), flag: 'separate' }),
  leaveOut: (trx, { access, readings }) => leaveOut(trx, access, readings, 'Left out when its conflict was settled.'),
  moved: moveToNames,
};

async function leaveOut(trx: Transaction, access: Access, readings: readonly Reading[], excludedReason: string): Promise<void> {
  await Reading.query(trx).where({ estateId: access.estateId }).whereIn('id', readings.map(({ id }) => id)).patch({ excludedReason, excludedBy: access.personId });
}

async function mark(trx: Transaction, access: Access, { readings, flag }: { readings: readonly Reading[]; flag: 'repeat' | 'separate' }): Promise<void> {
  await trx.raw('update readings set flags = flags || to_jsonb(?::text) where estate_id = ? and id = any(?) and not flags @> to_jsonb(?::text)', [flag, access.estateId, readings.map(({ id }) => id), flag]);
}

/** Counter-records on the vines that carry the names today; the first records stay as they came. */
async function moveToNames(trx: Transaction, { access, readings, now }: Settling): Promise<void> {
  for (const blockId of new Set(readings.flatMap((reading) => reading.blockId ?? []))) {
    const ground = await loadBlockVines(access.estateId, blockId, trx);
    for (const { seenAs, ...reading } of readings.filter((one) => one.blockId === blockId)) {
      if (seenAs === null) continue;
      const index = ground.stored.findIndex(({ label }) => label === seenAs.row);
      const ordinal = index < 0 ? null : vineOrdinal(ground.rows.rows[index]!, seenAs.vine, ground.block.vineOneEnd);
      if (ordinal === null) throw new Unusable('noSuchVine', say('noSuchVineToday', { row: seenAs.row, vine: seenAs.vine, block: ground.block.name }));
      await Reading.query(trx).insert({ ...reading, id: randomUUID(), rowId: ground.stored[index]!.id, ordinal, position: null, targetId: null, supersedes: reading.id, typedBy: access.personId, receivedAt: now, seenAs });
    }
  }
}
