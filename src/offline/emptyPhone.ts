import { fieldDatabase } from './fieldDatabase.ts';

/** Clears rounds, lists, readings and photos: this phone was reported lost and everything on it has been received. */
export async function emptyPhone(): Promise<void> {
  const database = await fieldDatabase();
  const stores = ['rounds', 'lists', 'entries', 'photos', 'bags', 'facts', 'closings'] as const;
  const transaction = database.transaction(stores, 'readwrite');
  await Promise.all([...stores.map((store) => transaction.objectStore(store).clear()), transaction.done]);
}
