import { may } from '../../../shared/catalog/permissions.ts';
import type { BagClash } from '../../../shared/contracts/bags.ts';
import type { Access } from '../../access/access.ts';
import { Bag } from '../../models/Bag.ts';
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
