import type { NewPickInterval, NewRestriction, RestrictionView } from '../../shared/contracts/restrictions.ts';
import type { Access } from '../access/access.ts';
import { Clash, Missing, Unusable } from '../errors.ts';
import { dayIn } from '../../shared/season/dayIn.ts';
import { peopleWhoMay } from '../ground/peopleWhoMay.ts';
import { restrictionViews } from '../ground/restrictionViews.ts';
import { queueMail } from '../mail/outbox.ts';
import { writeAudit } from '../models/AuditEntry.ts';
import { Block } from '../models/Block.ts';
import { BlockRow } from '../models/BlockRow.ts';
import { EntryRestriction } from '../models/EntryRestriction.ts';
import { Estate } from '../models/Estate.ts';
import { Membership } from '../models/Membership.ts';
import { Person } from '../models/Person.ts';
import { PickIntervalChange } from '../models/PickIntervalChange.ts';
import { say } from '../sentences/say.ts';

/** Restrictions of the estate or of one block, newest first; those in force are marked. With the names of those who may lift one. */
export async function listRestrictions(access: Access, options: { blockId?: string; now: Date }): Promise<{ items: RestrictionView[]; lifters: string[] }> {
  const query = EntryRestriction.query().where({ estateId: access.estateId }).orderBy('endsAt', 'desc').limit(300);
  if (options.blockId) query.where({ blockId: options.blockId });
  const lifters = await peopleWhoMay(undefined, access.estateId, 'restrictions.lift');
  return { items: await restrictionViews(access.estateId, await query, options.now), lifters: lifters.map(({ name }) => name) };
}

/** Sets a restriction and tells everybody with access: safety notices cannot be muted. */
export async function setRestriction(access: Access, input: NewRestriction): Promise<{ id: string }> {
  return EntryRestriction.transaction(async (trx) => {
    const block = await Block.query(trx).findOne({ estateId: access.estateId, id: input.blockId }).whereNull('retiredAt');
    if (!block) throw new Missing(say('unknownBlock'));
    if (input.rowIds) {
      const known = await BlockRow.query(trx).where({ estateId: access.estateId, blockId: block.id }).whereIn('id', input.rowIds).resultSize();
      if (known !== new Set(input.rowIds).size) throw new Unusable('unknownRows', say('unknownRows', { block: block.name }));
    }
    const row = await EntryRestriction.query(trx).insert({ ...input, startsAt: new Date(input.startsAt), endsAt: new Date(input.endsAt), estateId: access.estateId, setBy: access.personId });
    await tellEverybody(access, block.name, input, trx);
    await writeAudit(trx, access, { action: 'restrictions.set', subjectType: 'block', subjectId: block.id, subjectName: block.name, after: input });
    return { id: row.id };
  });
}

/** Ends entry before its time; the pre-harvest interval stays. Needs a person who may and a reason; both stay on record. */
export async function liftRestriction(access: Access, restrictionId: string, options: { reason: string; now: Date }): Promise<void> {
  await EntryRestriction.transaction(async (trx) => {
    const row = await EntryRestriction.query(trx).findOne({ estateId: access.estateId, id: restrictionId }).forUpdate().throwIfNotFound();
    if (row.liftedAt) throw new Clash('lifted', say('restrictionLifted'));
    if (row.endsAt <= options.now) throw new Clash('over', say('restrictionOver'));
    await row.$query(trx).patch({ liftedAt: options.now, liftedBy: access.personId, liftedReason: options.reason });
    await tellLifted(access, row, options.reason, trx);
    await writeAudit(trx, access, {
      action: 'restrictions.lift',
      subjectType: 'block',
      subjectId: row.blockId,
      subjectName: row.product,
      before: { endsAt: row.endsAt.toISOString() },
      after: { liftedAt: options.now.toISOString(), noPickBefore: row.noPickBefore },
      reason: options.reason,
    });
  });
}

/**
 * Puts right the day before which nothing may be picked, or takes it away where nothing was applied. Entry stays as it
 * is. The days before and after, the ground, the person and the reason stay on record.
 */
export async function changePickInterval(access: Access, restrictionId: string, input: NewPickInterval, { now }: { now: Date }): Promise<void> {
  await EntryRestriction.transaction(async (trx) => {
    const row = await EntryRestriction.query(trx).findOne({ estateId: access.estateId, id: restrictionId }).forUpdate().throwIfNotFound();
    const { noPickBefore: after, basis, reason } = input;
    const before = row.noPickBefore;
    if (before === after) throw new Clash('unchanged', after === null ? say('noPickInterval') : say('pickDaySame', { day: after }));
    const { timeZone } = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
    const today = dayIn(timeZone, now);
    if ((before === null || before <= today) && (after === null || after <= today)) throw new Clash('over', say('pickIntervalOver'));
    if (basis === 'labelAllows' && (before === null || after! > before)) throw new Unusable('notEarlier', say('notEarlier'));
    await PickIntervalChange.query(trx).insert({ estateId: access.estateId, restrictionId, basis, dayBefore: before, dayAfter: after, reason, changedBy: access.personId, changedAt: now });
    await row.$query(trx).patch({ noPickBefore: after });
    await writeAudit(trx, access, { action: 'restrictions.pickInterval', subjectType: 'block', subjectId: row.blockId, subjectName: row.product, before: { noPickBefore: before }, after: { noPickBefore: after, basis }, reason });
  });
}

async function tellEverybody(access: Access, blockName: string, input: NewRestriction, trx: Parameters<typeof queueMail>[0]): Promise<void> {
  const { estate, deedBy, readers } = await readersOf(access, trx);
  const lifters = (await peopleWhoMay(trx, access.estateId, 'restrictions.lift')).map(({ name }) => name);
  for (const reader of readers) {
    await queueMail(trx, {
      estateId: access.estateId,
      kind: 'restriction',
      to: { address: reader.email!, name: reader.name, language: reader.language },
      facts: {
        estate: estate.name,
        block: blockName,
        until: localTime(input.endsAt, estate.timeZone, reader.language),
        product: input.product,
        interval: input.labelInterval,
        setter: deedBy.name,
        lifters: new Intl.ListFormat(reader.language, { type: 'disjunction' }).format(lifters),
      },
    });
  }
}

/** Whoever was told to stay out is told that entry was lifted, and that the pre-harvest interval was not. */
async function tellLifted(access: Access, { blockId, product, noPickBefore }: EntryRestriction, reason: string, trx: Parameters<typeof queueMail>[0]): Promise<void> {
  const { estate, deedBy, readers } = await readersOf(access, trx);
  const { name: block } = await Block.query(trx).findOne({ estateId: access.estateId, id: blockId }).select('name').throwIfNotFound();
  for (const reader of readers) {
    const day = noPickBefore === null ? '' : new Intl.DateTimeFormat(reader.language, { timeZone: 'UTC', day: 'numeric', month: 'long', year: 'numeric' }).format(new Date(noPickBefore));
    await queueMail(trx, {
      estateId: access.estateId,
      kind: noPickBefore === null ? 'restrictionLifted' : 'restrictionLiftedNoPick',
      to: { address: reader.email!, name: reader.name, language: reader.language },
      facts: { estate: estate.name, block, product, who: deedBy.name, reason, day },
    });
  }
}

/** Everybody with access and a mail address, guests apart: safety notices cannot be muted. */
async function readersOf(access: Access, trx: Parameters<typeof queueMail>[0]): Promise<{ estate: Estate; deedBy: Person; readers: Person[] }> {
  const estate = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
  const deedBy = await Person.query(trx).findById(access.personId).throwIfNotFound();
  const readers = await Person.query(trx)
    .whereNotNull('email')
    .whereIn('id', Membership.query(trx).where({ estateId: access.estateId }).whereNull('endedAt').whereNot({ role: 'guest' }).select('personId'));
  return { estate, deedBy, readers };
}

function localTime(iso: string, timeZone: string, language: string): string {
  return new Intl.DateTimeFormat(language, { timeZone, weekday: 'short', day: 'numeric', month: 'short', hour: '2-digit', minute: '2-digit' }).format(new Date(iso));
}
