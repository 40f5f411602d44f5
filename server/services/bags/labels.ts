import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { Bag } from '../../models/Bag.ts';
import { Estate } from '../../models/Estate.ts';
import { Reading } from '../../models/Reading.ts';
import { Season } from '../../models/Season.ts';
import { seasonOn } from './bagContext.ts';
import { say } from '../../sentences/say.ts';

/**
 * A label that lay on the lab's bench, or on a printed roll, before the phone sent what is in the bag: the bag takes the
 * label with its receipt and its figures, and the place holder is void.
 */
export async function takeLabelOver(trx: Transaction, access: Access, change: { bag: Bag; from: Bag; seasonId: string }): Promise<void> {
  const { bag, from, seasonId } = change;
  const { estateId } = access;
  await Bag.query(trx).where({ estateId, id: from.id }).patch({ state: 'void' });
  await Bag.query(trx).where({ estateId, id: bag.id }).patch({ clashesWith: null, ...(from.receivedAt === null ? {} : { state: 'received', receivedAt: from.receivedAt, receivedBy: from.receivedBy }) });
  await moveLabResults(trx, estateId, [{ from: from.id, to: { ...bag, seasonId } }]);
}

interface Move {
  from: string;
  to: Pick<Bag, 'id' | 'blockId' | 'roundId' | 'closedAt' | 'createdAt'> & { seasonId: string };
}

/** Figures of the lab follow the label: they are given to the bag that carries it, with that bag's block, round and time. */
export async function moveLabResults(trx: Transaction, estateId: string, moves: readonly Move[]): Promise<number> {
  const lists: { ids: string[]; to: Move['to'] }[] = [];
  // All are looked up before any is moved, so that two bags can change places.
  for (const { from, to } of moves) lists.push({ ids: (await Reading.query(trx).where({ estateId, bagId: from, source: 'lab' }).select('id')).map(({ id }) => id), to });
  for (const { ids, to } of lists) {
    await Reading.query(trx).where({ estateId }).whereIn('id', ids).patch({ bagId: to.id, blockId: to.blockId, roundId: to.roundId, takenAt: to.closedAt ?? to.createdAt, seasonId: to.seasonId });
  }
  return lists.reduce((sum, { ids }) => sum + ids.length, 0);
}

/** Tells the season that a bag belongs to by its day. A label that nobody has sent yet goes to the newest season until then. */
export async function seasonFinder(trx: Transaction, estateId: string): Promise<(bag: Bag) => string> {
  const seasons = await Season.query(trx).where({ estateId }).orderBy('startsOn', 'desc');
  const { timeZone } = await Estate.query(trx).findById(estateId).select('timeZone').throwIfNotFound();
  return (bag) => {
    const season = seasonOn(seasons, (bag.closedAt ?? bag.createdAt).toISOString(), timeZone) ?? seasons[0];
    if (!season) throw new Unusable('noSeason', say('noSeason'));
    return season.id;
  };
}
