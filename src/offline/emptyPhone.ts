import { fieldDatabase } from './fieldDatabase.ts';
import { isWithServer } from './prune.ts';

/**
 * Clears rounds, lists and whatever has been received from a phone that was reported lost. What the office does not have
 * stays, whoever it is of and why ever it was not taken: it is nowhere else. Answers how much stays.
 */
export async function emptyPhone(): Promise<number> {
  const database = await fieldDatabase();
  const transaction = database.transaction(['rounds', 'lists', 'entries', 'photos', 'bags', 'facts', 'closings'], 'readwrite');
  const whole = (['rounds', 'lists', 'facts', 'closings'] as const).map((part) => transaction.objectStore(part).clear());
  const [entries, photos, bags] = [transaction.objectStore('entries'), transaction.objectStore('photos'), transaction.objectStore('bags')];
  const [allEntries, allPhotos, allBags] = await Promise.all([entries.getAll(), photos.getAll(), bags.getAll()]);
  const gone = [
    ...allEntries.filter((entry) => isWithServer(entry, allBags)).map(({ id }) => entries.delete(id)),
    ...allPhotos.filter(({ received }) => received === 1).map(({ id }) => photos.delete(id)),
    ...allBags.filter(({ received }) => received === 1).map(({ id }) => bags.delete(id)),
  ];
  await Promise.all([...whole, ...gone, transaction.done]);
  return allEntries.length + allPhotos.length + allBags.length - gone.length;
}
