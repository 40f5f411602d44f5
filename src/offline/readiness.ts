import { newId } from '../lib/newId.ts';
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

/** Reads every round of the day back, writes a day's worth and reads it, and looks for the kept program: a test, not a wish. What a private window refuses to tell is an answer, not an error. */
export async function checkReadiness(owner: { estateId: string; personId: string }, roundIds: readonly string[], now: Date): Promise<Readiness> {
  const kept = await Promise.all(roundIds.map((id) => orNothing(keptRound(owner, id), null)));
  const hasRound = kept.every((one) => one !== null && one.round.stops.every(({ rowId }) => one.round.rows.some(({ id }) => id === rowId)) && one.round.measures.length > 0);
  return { hasRound, canWrite: await writesAndReads(), hasProgram: await orNothing(programIsKept(), false), hasSpace: await orNothing(spaceIsLeft(), true), isPersistent: await orNothing(askToPersist(), null), checkedAt: now.toISOString() };
}

/** As much as a day of readings: a phone that still takes a line may have no room for the next. */
const trialBytes = 256 * 1024;
/** The most a browser gives at once. */
const randomBytes = 65_536;

/** Of this page alone: another that tests at the same time must not read what this one wrote. */
const trialKey = `selfTest ${newId()}`;
let testing: Promise<boolean> | null = null;

/** One test at a time: two would overwrite each other, and a sound phone would seem broken. */
function writesAndReads(): Promise<boolean> {
  testing ??= writeAndRead().finally(() => (testing = null));
  return testing;
}

/** False as well where the phone is full or its store was taken away: that is what is asked here. */
async function writeAndRead(): Promise<boolean> {
  try {
    const database = await fieldDatabase();
    // By chance, so that no store can press it into less room.
    const value = new Uint8Array(trialBytes);
    for (let at = 0; at < trialBytes; at += randomBytes) crypto.getRandomValues(value.subarray(at, at + randomBytes));
    const transaction = database.transaction('facts', 'readwrite', { durability: 'strict' });
    await Promise.all([transaction.store.put({ key: trialKey, value }), transaction.done]);
    const stored = (await database.get('facts', trialKey))?.value;
    await database.delete('facts', trialKey);
    return stored instanceof Uint8Array && stored.length === trialBytes && stored.every((byte, at) => byte === value[at]);
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
