import type { PartialModelObject, QueryBuilder } from 'objection';
import type { z } from 'zod';
import type { clashChoice } from '../../../shared/contracts/bags.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { Reading } from '../../models/Reading.ts';
import { holdersOf } from './bagContext.ts';
import { seasonFinder, takeLabelOver } from './labels.ts';
import { bagBefore, type SettledClashDone } from './reopenClash.ts';
import { say } from '../../sentences/say.ts';

/**
 * Settles a label that is on two bags. `same`: one bag was closed by two people; the first closing takes in the vines and
 * readings of the later. `keepFirst`, `keepLater`: the other one is void and its own readings are left out with the reason;
 * the later takes the label with receipt and figures of the lab over.
 * `relabel`: both are real and the later one carries another label. Nothing is deleted.
 */
export async function settleClash(access: Access, bagId: string, input: z.infer<typeof clashChoice>): Promise<void> {
  const { estateId, personId } = access;
  await Bag.transaction(async (trx) => {
    await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
    const later = await Bag.query(trx).findOne({ estateId, id: bagId }).throwIfNotFound();
    if (later.clashesWith === null || later.state === 'void') throw new Clash('settled', say('labelOnce', { code: later.code }));
    const first = await Bag.query(trx).findOne({ estateId, id: later.clashesWith }).throwIfNotFound();
    const [wasFirst, wasLater] = [bagBefore(first), bagBefore(later)];
    let [moved, leftOut]: [string[], string[]] = [[], []];
    let holder: Bag | undefined;
    const closing = Bag.query(trx).where({ estateId, id: later.id });
    if (input.choice === 'same') {
      const extra = later.vines.filter((vine) => !first.vines.some((one) => one.rowId === vine.rowId && one.ordinal === vine.ordinal));
      await Bag.query(trx).where({ estateId, id: first.id }).patch({ vines: [...first.vines, ...extra] });
      moved = await changeReadings(Reading.query(trx).where({ estateId, bagId: later.id }), { bagId: first.id });
      await closing.patch({ state: 'void' });
    } else if (input.choice === 'keepFirst') {
      leftOut = await changeReadings(Reading.query(trx).where({ estateId, bagId: later.id }).whereNull('excludedReason'), { excludedReason: input.reason, excludedBy: personId });
      await closing.patch({ state: 'void' });
    } else if (input.choice === 'keepLater') {
      leftOut = await changeReadings(Reading.query(trx).where({ estateId, bagId: first.id }).whereNot({ source: 'lab' }).whereNull('excludedReason'), { excludedReason: input.reason, excludedBy: personId });
      await takeLabelOver(trx, access, { bag: later, from: first, seasonId: (await seasonFinder(trx, estateId))(later) });
      // A third bag with the label clashes with the one that holds it now.
      await Bag.query(trx).where({ estateId, clashesWith: first.id }).patch({ clashesWith: later.id });
    } else {
      if (input.newCode === null) throw new Missing(say('nameNewLabel'));
      [holder] = await holdersOf(trx, estateId, [input.newCode]);
      if (holder?.closedAt) throw new Clash('labelTaken', say('labelTaken', { code: input.newCode }));
      await closing.patch({ code: input.newCode, clashesWith: holder?.id ?? null });
      if (holder) await takeLabelOver(trx, access, { bag: later, from: holder, seasonId: (await seasonFinder(trx, estateId))(later) });
    }
    const done: SettledClashDone = { first: wasFirst, later: wasLater, holder: holder ? bagBefore(holder) : null, moved, leftOut };
    await writeAudit(trx, access, {
      action: 'bags.settle',
      subjectType: 'bags',
      subjectId: later.id,
      subjectName: later.code,
      before: { first: first.id, later: later.id },
      after: { choice: input.choice, newCode: input.newCode, done },
      reason: input.reason,
    });
  });
}

/** Changes these readings and tells which they were. What somebody left out before keeps its own reason. */
async function changeReadings(readings: QueryBuilder<Reading, Reading[]>, change: PartialModelObject<Reading>): Promise<string[]> {
  return (await readings.patch(change).returning('id')).map(({ id }) => id);
}
