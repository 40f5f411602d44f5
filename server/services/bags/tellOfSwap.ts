import type { Transaction } from 'objection';
import { spellLabelCode } from '../../../shared/field/labelCode.ts';
import type { Access } from '../../access/access.ts';
import { queueMail } from '../../mail/outbox.ts';
import type { Bag } from '../../models/Bag.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';

/**
 * Tells those whom an exchange of labels concerns, except who did it: who closed the bags or took them in, who sent their
 * rounds, and who measured or checked what was found in them. `one` and `other` as they were before.
 */
export async function tellOfSwap(trx: Transaction, access: Access, swap: { one: Bag; other: Bag; reason: string; figures: number }): Promise<void> {
  const { estateId } = access;
  const { one, other, reason, figures } = swap;
  const estate = await Estate.query(trx).findById(estateId).throwIfNotFound();
  const who = await Person.query(trx).findById(access.personId).throwIfNotFound();
  const blocks = await Block.query(trx).where({ estateId }).whereIn('id', [one, other].flatMap(({ blockId }) => blockId ?? []));
  const placeOf = (bag: Bag, language: string) => {
    const block = blocks.find(({ id }) => id === bag.blockId)?.name;
    if (block === undefined || bag.closedAt === null) return '–';
    return `${block}, ${new Intl.DateTimeFormat(language, { timeZone: estate.timeZone, weekday: 'short', day: 'numeric', month: 'short', hour: '2-digit', minute: '2-digit' }).format(bag.closedAt)}`;
  };
  for (const { email, name, language } of await concerned(trx, access, [one, other])) {
    await queueMail(trx, {
      estateId, kind: 'bagSwap', to: { address: email!, name, language },
      facts: { estate: estate.name, who: who.name, one: spellLabelCode(one.code), other: spellLabelCode(other.code), oneNow: placeOf(other, language), otherNow: placeOf(one, language), reason, figures },
    });
  }
}

async function concerned(trx: Transaction, { estateId, personId }: Access, bags: readonly Bag[]): Promise<Person[]> {
  const readings = await Reading.query(trx).where({ estateId, source: 'lab' }).whereIn('bagId', bags.map(({ id }) => id)).select('personId', 'typedBy', 'stateBy');
  const rounds = await Round.query(trx).where({ estateId }).whereIn('id', bags.flatMap(({ roundId }) => roundId ?? [])).select('createdBy');
  const ids = new Set([
    ...bags.flatMap(({ closedBy, receivedBy, missingBy }) => [closedBy, receivedBy, missingBy]),
    ...readings.flatMap((reading) => [reading.personId, reading.typedBy, reading.stateBy]),
    ...rounds.map(({ createdBy }) => createdBy),
  ]);
  const others = [...ids].filter((id) => id !== null && id !== personId) as string[];
  return Person.query(trx).whereNotNull('email').whereIn('id', others).whereIn('id', Membership.query(trx).where({ estateId }).whereNull('endedAt').select('personId')).orderBy('name');
}
