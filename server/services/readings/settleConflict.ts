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
import { say } from '../../sentences/say.ts';
import { conflictPlace } from './conflictPlace.ts';
import { settlesAll } from './listConflicts.ts';
import { inOrderOfTaking, newestReadings } from './newestReadings.ts';

/** Reasons that settling gives, by which taking it back knows its own. */
export const leftOutReasons = { keepOne: 'Another reading of the same vine was kept.', leaveOut: 'Left out when its conflict was settled.' } as const;

/** What settling did to readings, by their ids: kept in the history, by which it can be taken back. */
export interface Settled {
  readonly leftOut?: readonly string[];
  readonly flagged?: readonly string[];
  readonly flag?: 'repeat' | 'separate';
  /** Counter-records on other vines. */
  readonly moved?: readonly string[];
}

/** Settles a conflict as a person says. Readings are left out, marked or corrected by counter-records; nothing is deleted. */
export async function settleConflict(access: Access, conflictId: string, input: ConflictChoice, now: Date): Promise<void> {
  await ReadingConflict.transaction(async (trx) => {
    const { conflict, chains, readings } = await openForSettling(trx, access, conflictId);
    if (conflict.state === 'settled') throw new Clash('settled', say('conflictSettled'));
    if (!answersTo[conflict.kind].includes(input.choice)) throw new Unusable('noSuchAnswer', say('noSuchAnswer', { choice: input.choice, choices: answersTo[conflict.kind].join(', ') }));
    // Named as it came or as it was corrected: both mean the same record.
    const kept = input.keptReadingId === null ? [] : (chains.get(input.keptReadingId)?.map(({ id }) => id) ?? [input.keptReadingId]);
    const { subjectName, at } = await conflictPlace(trx, conflict, readings);
    const done = await actions[input.choice](trx, { access, readings, kept, now });
    await conflict.$query(trx).patch({ state: 'settled', choice: input.choice, keptReadingId: input.keptReadingId, settledBy: access.personId, settledAt: now });
    await writeAudit(trx, access, { action: 'conflicts.settle', subjectType: 'conflict', subjectId: conflictId, subjectName, after: { ...input, at, kind: conflict.kind, readingIds: conflict.readingIds, done } });
  });
}

/** The conflict, locked, with what its readings are by now; refused to whom it does not concern. */
export async function openForSettling(trx: Transaction, access: Access, conflictId: string): Promise<{ conflict: ReadingConflict; chains: Map<string, Reading[]>; readings: Reading[] }> {
  const conflict = await ReadingConflict.query(trx).findOne({ estateId: access.estateId, id: conflictId }).forUpdate().throwIfNotFound();
  const chains = await newestReadings(access.estateId, conflict.readingIds, trx);
  const readings = inOrderOfTaking(chains.values());
  if (!settlesAll(access) && readings.some(({ personId }) => personId !== access.personId)) throw new NotAllowed(say('readingsOfOthers'));
  return { conflict, chains, readings };
}

interface Settling {
  access: Access;
  readings: readonly Reading[];
  kept: readonly string[];
  now: Date;
}

const actions: Record<ConflictChoice['choice'], (trx: Transaction, settling: Settling) => Promise<Settled>> = {
  keepOne: async (trx, { access, readings, kept }) => {
    if (!readings.some(({ id }) => kept.includes(id))) throw new Missing(say('chooseReading'));
    return leaveOut(trx, access, readings.filter(({ id }) => !kept.includes(id)), leftOutReasons.keepOne);
  },
  repeat: (trx, { access, readings }) => mark(trx, access, { readings: readings.slice(1), flag: 'repeat' }),
  bothReal: (trx, { access, readings }) => mark(trx, access, { readings: readings.slice(1), flag: 'separate' }),
  leaveOut: (trx, { access, readings }) => leaveOut(trx, access, readings, leftOutReasons.leaveOut),
  moved: moveToNames,
};

/** What somebody left out before keeps its own reason. */
async function leaveOut(trx: Transaction, access: Access, readings: readonly Reading[], excludedReason: string): Promise<Settled> {
  const leftOut = readings.filter((reading) => reading.excludedReason === null).map(({ id }) => id);
  await Reading.query(trx).where({ estateId: access.estateId }).whereIn('id', leftOut).patch({ excludedReason, excludedBy: access.personId });
  return { leftOut };
}

async function mark(trx: Transaction, access: Access, { readings, flag }: { readings: readonly Reading[]; flag: 'repeat' | 'separate' }): Promise<Settled> {
  const flagged = readings.filter(({ flags }) => !(flags as string[]).includes(flag)).map(({ id }) => id);
  await trx.raw('update readings set flags = flags || to_jsonb(?::text) where estate_id = ? and id = any(?)', [flag, access.estateId, flagged]);
  return { flagged, flag };
}

/** Counter-records on the vines that carry the names today; the first records stay as they came. */
async function moveToNames(trx: Transaction, { access, readings, now }: Settling): Promise<Settled> {
  const moved: string[] = [];
  for (const blockId of new Set(readings.flatMap((reading) => reading.blockId ?? []))) {
    const ground = await loadBlockVines(access.estateId, blockId, trx);
    for (const { seenAs, ...reading } of readings.filter((one) => one.blockId === blockId)) {
      if (seenAs === null) continue;
      const index = ground.stored.findIndex(({ label }) => label === seenAs.row);
      const ordinal = index < 0 ? null : vineOrdinal(ground.rows.rows[index]!, seenAs.vine, ground.block.vineOneEnd);
      if (ordinal === null) throw new Unusable('noSuchVine', say('noSuchVineToday', { row: seenAs.row, vine: seenAs.vine, block: ground.block.name }));
      const id = randomUUID();
      await Reading.query(trx).insert({ ...reading, id, rowId: ground.stored[index]!.id, ordinal, position: null, targetId: null, supersedes: reading.id, typedBy: access.personId, receivedAt: now, seenAs });
      moved.push(id);
    }
  }
  return { moved };
}
