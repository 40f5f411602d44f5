import type { Transaction } from 'objection';
import type { ClashChoice } from '../../../shared/contracts/bags.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { AuditEntry, writeAudit } from '../../models/AuditEntry.ts';
import { Bag, type BagVine } from '../../models/Bag.ts';
import { Reading } from '../../models/Reading.ts';
import { say } from '../../sentences/say.ts';
import { moveLabResults, seasonFinder } from './labels.ts';

/** What settling a label found and did, kept in its history entry, by which it can be taken back. */
export interface SettledClashDone {
  readonly first: BagBefore;
  readonly later: BagBefore;
  /** The place holder of the new label, where there was one. */
  readonly holder: BagBefore | null;
  /** Readings that went over to the first bag, and readings that were left out. */
  readonly moved: readonly string[];
  readonly leftOut: readonly string[];
}

export type BagBefore = Pick<Bag, 'id' | 'code' | 'state' | 'vines'> & { readonly swappedAt: string | null };

export const bagBefore = ({ id, code, state, vines, swappedAt }: Bag): BagBefore => ({ id, code, state, vines, swappedAt: swappedAt?.toISOString() ?? null });

interface Reopening {
  readonly first: Bag;
  readonly later: Bag;
  readonly holder: Bag | null;
  readonly done: SettledClashDone;
}

/**
 * Takes a mistaken answer to a label on two bags back: the label is on both again, what the lab knows of it is with the
 * first closing, what was left out counts. Refused where the bags were changed since in a way that this would undo unseen.
 */
export async function reopenClash(access: Access, bagId: string): Promise<void> {
  const { estateId } = access;
  await Bag.transaction(async (trx) => {
    await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
    const later = await Bag.query(trx).findOne({ estateId, id: bagId }).throwIfNotFound();
    if (later.clashesWith !== null && later.state !== 'void') throw new Clash('open', say('labelOpen', { code: later.code }));
    const entry = await AuditEntry.query(trx).where({ estateId, action: 'bags.settle', subjectId: bagId }).orderBy('id', 'desc').first();
    const after = entry?.after as (Pick<ClashChoice, 'choice'> & { done?: SettledClashDone }) | undefined;
    if (!after?.done) throw new Clash('settledBefore', say('labelSettledBefore', { code: later.code }));
    const { choice, done } = after;
    const first = await Bag.query(trx).findOne({ estateId, id: done.first.id }).throwIfNotFound();
    const holder = done.holder === null ? null : await Bag.query(trx).findOne({ estateId, id: done.holder.id }).throwIfNotFound();
    const reopening = { first, later, holder, done };
    if (await isChanged(trx, choice, reopening)) throw new Clash('bagsChanged', say('labelChangedSince', { code: done.later.code }));
    await giveBack(trx, access, choice, reopening);
    await Reading.query(trx).where({ estateId, excludedReason: entry!.reason }).whereIn('id', [...done.leftOut]).patch({ excludedReason: null, excludedBy: null });
    await writeAudit(trx, access, { action: 'bags.reopen', subjectType: 'bags', subjectId: bagId, subjectName: done.later.code, before: { choice } });
  });
}

async function isChanged(trx: Transaction, choice: ClashChoice['choice'], { first, later, holder, done }: Reopening): Promise<boolean> {
  const isSwapped = (bag: Bag, before: BagBefore) => (bag.swappedAt?.toISOString() ?? null) !== before.swappedAt;
  const isVoid = ({ state }: Bag) => state === 'void';
  if (isSwapped(first, done.first) || isSwapped(later, done.later) || (holder && isSwapped(holder, done.holder!))) return true;
  if (isVoid(first) !== (choice === 'keepLater') || isVoid(later) !== (choice === 'same' || choice === 'keepFirst')) return true;
  if (!isVoid(later) && later.vines.length !== done.later.vines.length) return true;
  if (choice !== 'relabel' || holder) return false;
  // The new label is at work: taking it off the bag would leave its figures without one.
  const { estateId, id } = later;
  return later.receivedAt !== null || (await Reading.query(trx).where({ estateId, bagId: id, source: 'lab' }).resultSize()) > 0 || (await Bag.query(trx).where({ estateId, clashesWith: id }).resultSize()) > 0;
}

async function giveBack(trx: Transaction, { estateId }: Access, choice: ClashChoice['choice'], { first, later, holder, done }: Reopening): Promise<void> {
  const bag = (id: string) => Bag.query(trx).where({ estateId, id });
  // The later bag first: no two bags may hold one label at any moment.
  await bag(later.id).patch({ code: done.later.code, state: done.later.state, clashesWith: first.id, ...(choice === 'same' || choice === 'keepFirst' ? {} : { receivedAt: null, receivedBy: null, missingAt: null, missingBy: null }) });
  if (choice === 'same') {
    const added = done.later.vines.filter((vine) => !done.first.vines.some((one) => isSameVine(one, vine)));
    await bag(first.id).patch({ vines: first.vines.filter((vine) => !added.some((one) => isSameVine(one, vine))) });
    await Reading.query(trx).where({ estateId, bagId: first.id }).whereIn('id', [...done.moved]).patch({ bagId: later.id });
  }
  const labelled = choice === 'keepLater' ? first : holder;
  if (labelled === null) return;
  const { receivedAt, receivedBy, missingAt, missingBy } = later;
  const state = choice === 'keepLater' ? done.first.state : done.holder!.state;
  await bag(labelled.id).patch({ state: receivedAt === null ? state : 'received', receivedAt, receivedBy, missingAt, missingBy });
  await Bag.query(trx).where({ estateId, clashesWith: later.id }).patch({ clashesWith: labelled.id });
  await moveLabResults(trx, estateId, [{ from: later.id, to: { ...labelled, seasonId: (await seasonFinder(trx, estateId))(labelled) } }]);
}

const isSameVine = (one: BagVine, other: BagVine): boolean => one.rowId === other.rowId && one.ordinal === other.ordinal;
