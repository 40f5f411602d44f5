import { fieldDatabase, type Entry, type KeptBag } from './fieldDatabase.ts';

const dayMs = 86_400_000;
/** Readings stay for looking back; bags for a season, because a label is bound once in it. */
const entryDays = 14;
const bagDays = 200;

/**
 * Clears from the phone what the server has had for long: received entries of rounds that are no longer kept here, picks
 * whose bag has been received, words of received photos, and last season's bags. What has not been received stays, however old. Answers how many went.
 */
export async function pruneReceived(now: Date): Promise<number> {
  const transaction = (await fieldDatabase()).transaction(['rounds', 'entries', 'bags', 'photos'], 'readwrite');
  const [rounds, entries, bags, photos] = [transaction.objectStore('rounds'), transaction.objectStore('entries'), transaction.objectStore('bags'), transaction.objectStore('photos')];
  const keptRounds = new Set((await rounds.getAll()).map(({ round }) => round.id));
  const allBags = await bags.getAll();
  const isOld = ({ at }: { at: string }, days: number) => Date.parse(at) < now.getTime() - days * dayMs;
  const oldEntries = (await entries.getAll()).filter((entry) => isOld(entry, entryDays) && !keptRounds.has(entry.roundId) && isWithServer(entry, allBags));
  const oldBags = allBags.filter((bag) => bag.received === 1 && isOld(bag, bagDays));
  const oldPhotos = (await photos.getAll()).filter((photo) => photo.received === 1 && isOld(photo, entryDays));
  await Promise.all([...oldPhotos.map(({ id }) => photos.delete(id)), ...oldEntries.map(({ id }) => entries.delete(id)), ...oldBags.map(({ id }) => bags.delete(id)), transaction.done]);
  return oldEntries.length + oldBags.length + oldPhotos.length;
}

/** True where the server has what was typed. A pick is sent with its bag and has no answer of its own. */
export function isWithServer(entry: Entry, bags: readonly KeptBag[]): boolean {
  if (entry.kind !== 'pick') return entry.received === 1;
  return bags.some(({ received, roundId, bag }) => received === 1 && roundId === entry.roundId && bag.vines.some(({ rowId, ordinal }) => rowId === entry.pick?.rowId && ordinal === entry.pick.ordinal));
}
