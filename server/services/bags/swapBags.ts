import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { holdersOf } from './bagContext.ts';
import { moveLabResults, seasonFinder } from './labels.ts';
import { tellOfSwap } from './tellOfSwap.ts';
import { say } from '../../sentences/say.ts';

/**
 * Exchanges the labels of two bags in one step. What was seen at the row stays with the closing; label, receipt and the
 * lab's figures change places, and those concerned get a mail. With an extra bag it gives a bag that is missing the label that lies on the bench.
 */
export async function swapBags(access: Access, input: { codes: readonly [string, string]; reason: string }, now: Date): Promise<void> {
  const { estateId } = access;
  await Bag.transaction(async (trx) => {
    await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
    const holders = await holdersOf(trx, estateId, input.codes);
    const [one, other] = input.codes.map((code) => holders.find((bag) => bag.code === code) ?? missing(code)) as [Bag, Bag];
    const seasonOf = await seasonFinder(trx, estateId);
    await exchange(trx, estateId, { one, other, now });
    const moved = await moveLabResults(trx, estateId, [
      { from: one.id, to: { ...other, seasonId: seasonOf(other) } },
      { from: other.id, to: { ...one, seasonId: seasonOf(one) } },
    ]);
    await tellOfSwap(trx, access, { one, other, reason: input.reason, figures: moved });
    await writeAudit(trx, access, {
      action: 'bags.swap', subjectType: 'bags', subjectId: one.id, subjectName: `${one.code}, ${other.code}`, reason: input.reason,
      before: { [one.id]: one.code, [other.id]: other.code }, after: { [one.id]: other.code, [other.id]: one.code, results: moved },
    });
  });
}

function missing(code: string): never {
  throw new Missing(say('unknownLabel', { code }));
}

async function exchange(trx: Transaction, estateId: string, { one, other, now }: { one: Bag; other: Bag; now: Date }): Promise<void> {
  const bag = (id: string) => Bag.query(trx).where({ estateId, id });
  // An aside code, because no two bags may hold one label at any moment.
  await bag(one.id).patch({ code: `aside ${one.id}` });
  await bag(other.id).patch({ ...labelSide(one), ...stateOf(other, one), swappedAt: now });
  await bag(one.id).patch({ ...labelSide(other), ...stateOf(one, other), swappedAt: now });
}

/** What goes with the label. */
function labelSide({ code, receivedAt, receivedBy, missingAt, missingBy }: Bag) {
  return { code, receivedAt, receivedBy, missingAt, missingBy };
}

/** A label on the bench whose closing is known now is received; a place holder that keeps the absent label is void. */
function stateOf(closing: Bag, label: Bag): { state: Bag['state'] } {
  if (label.receivedAt !== null) return { state: 'received' };
  return { state: closing.closedAt === null ? 'void' : 'closed' };
}
