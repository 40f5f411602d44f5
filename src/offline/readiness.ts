import { fieldDatabase, orNothing } from './fieldDatabase.ts';
import { keptRound } from './keptRounds.ts';

/** What a phone must hold before somebody walks out of reach. */
export interface Readiness {
  readonly hasRound: boolean;
  readonly canWrite: boolean;
  /** The program itself is kept on the phone, so that it opens without signal. */
  readonly hasProgram: boolean;
  /** Room for a day of readings and photos; true where the browser does not tell. */
  readonly hasSpace: boolean;
  /** The browser promised not to clear the store; null where it cannot be asked. */
  readonly isPersistent: boolean | null;
  readonly checkedAt: string;
}

export function isReady({ hasRound, canWrite, hasProgram, hasSpace }: Readiness): boolean {
  return hasRound && canWrite && hasProgram && hasSpace;
}

/** Reads the stored round back, writes and reads a line, and looks for the kept program: a test, not a wish. */
export async function checkReadiness(owner: { estateId: string; personId: string }, roundId: string, now: Date): Promise<Readiness> {
  const kept = await orNothing(keptRound(owner, roundId), null);
  const hasRound = kept !== null && kept.round.stops.every(({ rowId }) => kept.round.rows.some(({ id }) => id === rowId)) && kept.round.measures.length > 0;
  return { hasRound, canWrite: await writesAndReads(now), hasProgram: await programIsKept(), hasSpace: await spaceIsLeft(), isPersistent: await askToPersist(), checkedAt: now.toISOString() };
}

/** False as well where the phone is full or its store was taken away: that is what is asked here. */
async function writesAndReads(now: Date): Promise<boolean> {
  const value = now.toISOString();
  try {
    const database = await fieldDatabase();
    await database.put('facts', { key: 'selfTest', value });
    return (await database.get('facts', 'selfTest'))?.value === value;
  } catch {
    return false;
  }
}

async function programIsKept(): Promise<boolean> {
  // While developing nothing is kept on purpose.
  if (import.meta.env.DEV) return true;
  if (!('serviceWorker' in navigator) || !('caches' in globalThis)) return false;
  const registration = await navigator.serviceWorker.getRegistration();
  return registration?.active != null && (await caches.match('/index.html', { ignoreSearch: true })) !== undefined;
}

/** Some hundred photos of 300 KB, and readings many times over. */
const dayBytes = 40 * 2 ** 20;

async function spaceIsLeft(): Promise<boolean> {
  const { quota, usage } = (await navigator.storage?.estimate?.()) ?? {};
  return quota === undefined || usage === undefined || quota - usage > dayBytes;
}

const answerMs = 2000;
let asked: Promise<boolean> | undefined;

/** Asks once. Some browsers ask the person and answer only when they do: the test does not wait for that, and looks again the next time. */
async function askToPersist(): Promise<boolean | null> {
  if (navigator.storage?.persist === undefined) return null;
  if (await navigator.storage.persisted()) return true;
  asked ??= navigator.storage.persist();
  return Promise.race([asked, new Promise<boolean>((resolve) => setTimeout(() => resolve(false), answerMs))]);
}
