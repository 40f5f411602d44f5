import { fieldDatabase } from './fieldDatabase.ts';

interface Kept {
  readonly personId: string;
  readonly received: 0 | 1;
  readonly outcome?: { readonly state: string } | null;
}

/**
 * Clears rounds, lists, readings and photos of a phone that was reported lost, once everything of its person has been
 * received. What others left here and could not be sent in their name stays: it is nowhere else.
 */
export async function emptyPhone(personId: string): Promise<void> {
  const database = await fieldDatabase();
  const transaction = database.transaction(['rounds', 'lists', 'entries', 'photos', 'bags', 'facts', 'closings'], 'readwrite');
  const whole = (['rounds', 'lists', 'facts', 'closings'] as const).map((part) => transaction.objectStore(part).clear());
  const isGone = (row: Kept): boolean => row.personId === personId || row.received === 1 || row.outcome?.state === 'refused';
  const parts = (['entries', 'photos', 'bags'] as const).map(async (part) => {
    const store = transaction.objectStore(part);
    const rows: (Kept & { id: string })[] = await store.getAll();
    await Promise.all(rows.filter(isGone).map(({ id }) => store.delete(id)));
  });
  await Promise.all([...whole, ...parts, transaction.done]);
}
