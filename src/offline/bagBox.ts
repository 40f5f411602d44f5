import type { BagBatchAnswer } from '../../shared/contracts/bags.ts';
import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type KeptBag } from './fieldDatabase.ts';
import { oneAtATime } from './oneAtATime.ts';
import { patienceMs } from './patience.ts';

/**
 * Keeps a closed bag. Answers the bag that carries the label already, when this phone knows one: a label is bound once.
 * Looking and writing are one transaction, so that two taps cannot both win.
 */
export async function addBag(bag: KeptBag): Promise<KeptBag | null> {
  const transaction = (await fieldDatabase()).transaction('bags', 'readwrite', { durability: 'strict' });
  const holder = (await transaction.store.index('code').getAll(bag.code)).find(({ outcome }) => outcome?.state !== 'refused');
  await Promise.all([holder ? null : transaction.store.add(structuredClone(bag)), transaction.done]);
  return holder ?? null;
}

export async function bagsOfRound(roundId: string): Promise<KeptBag[]> {
  return (await (await fieldDatabase()).getAll('bags')).filter((bag) => bag.roundId === roundId).sort((a, b) => a.at.localeCompare(b.at));
}

export async function bagsOfPerson(personId: string): Promise<KeptBag[]> {
  return (await (await fieldDatabase()).getAll('bags')).filter((bag) => bag.personId === personId);
}

export async function waitingBags(personId: string): Promise<KeptBag[]> {
  return (await (await fieldDatabase()).getAllFromIndex('bags', 'received', 0)).filter((bag) => bag.personId === personId && bag.outcome?.state !== 'refused');
}

/** Sends closed bags; repeated as often as needed, stored once. */
export const sendBags = oneAtATime(sendAll);

async function sendAll(personId: string, now: () => Date): Promise<void> {
  const waiting = await waitingBags(personId);
  for (const estateId of new Set(waiting.map((bag) => bag.estateId))) {
    const bags = waiting.filter((bag) => bag.estateId === estateId);
    try {
      const { outcomes } = await http.post<BagBatchAnswer>(`/api/estates/${estateId}/bags`, { bags: bags.map(({ bag }) => ({ ...bag, deviceTime: now().toISOString() })) }, { withinMs: patienceMs });
      const transaction = (await fieldDatabase()).transaction('bags', 'readwrite', { durability: 'strict' });
      const notes = bags.map((bag) => {
        const outcome = outcomes.find(({ id }) => id === bag.id);
        return outcome && transaction.store.put({ ...bag, received: outcome.state === 'refused' ? 0 : 1, outcome });
      });
      await Promise.all([...notes, transaction.done]);
    } catch (error) {
      if (error instanceof HttpProblem) return;
      throw error;
    }
  }
}
