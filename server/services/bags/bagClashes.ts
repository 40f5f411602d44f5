import { may } from '../../../shared/catalog/permissions.ts';
import type { BagClash, SettledBagClash } from '../../../shared/contracts/bags.ts';
import type { Access } from '../../access/access.ts';
import { AuditEntry } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { Person } from '../../models/Person.ts';
import { describeBags } from './listBags.ts';

const most = 100;

/**
 * Labels that are on two bags and wait for somebody, the newest first, with both closings. Who settles none for others sees
 * those of which they closed a bag.
 */
export async function bagClashes(access: Access): Promise<BagClash[]> {
  const { estateId, personId } = access;
  const maySettle = may(access.roles, 'labels.settle');
  const later = await Bag.query().where({ estateId }).whereNotNull('clashesWith').whereNot({ state: 'void' }).orderBy('createdAt', 'desc').limit(most);
  const first = await Bag.query().where({ estateId }).whereIn('id', later.flatMap(({ clashesWith }) => clashesWith ?? []));
  const pairs = later.flatMap((bag) => first.filter(({ id }) => id === bag.clashesWith).map((holder) => [holder, bag] as const));
  const shown = pairs.filter((pair) => maySettle || pair.some(({ closedBy }) => closedBy === personId));
  const lines = new Map((await describeBags(access, [...new Set(shown.flat())])).map((line) => [line.id, line]));
  return shown.map(([holder, bag]) => ({ first: lines.get(holder.id)!, later: lines.get(bag.id)!, maySettle }));
}

/** Labels that were on two bags, as they were settled last, for whoever may settle them. What was taken back is open, not here. */
export async function settledClashes(access: Access): Promise<SettledBagClash[]> {
  if (!may(access.roles, 'labels.settle')) return [];
  const entries = await AuditEntry.query().where({ estateId: access.estateId }).whereIn('action', ['bags.settle', 'bags.reopen']).orderBy('id', 'desc').limit(most);
  const newest = [...new Map([...entries].reverse().map((entry) => [entry.subjectId, entry])).values()].filter(({ action }) => action === 'bags.settle').reverse();
  const people = await Person.query().findByIds([...new Set(newest.flatMap(({ personId }) => personId ?? []))]).select('id', 'name');
  return newest.map(({ subjectId, subjectName, personId, after, reason, at }) => {
    const { choice, done } = after as Pick<SettledBagClash, 'choice'> & { done?: { later: { code: string } } };
    return { bagId: subjectId, code: done?.later.code ?? subjectName, choice, reason: reason ?? '', settledBy: people.find(({ id }) => id === personId)?.name ?? null, settledAt: at.toISOString(), mayReopen: done !== undefined };
  });
}
