import { openDB, unwrap, wrap, type DBSchema, type IDBPDatabase } from 'idb';
import type { BagOutcome, NewBag } from '../../shared/contracts/bags.ts';
import type { NewReading, ReadingOutcome, VineFinding } from '../../shared/contracts/readings.ts';
import type { FieldRound, RoundSummary } from '../../shared/contracts/rounds.ts';

/** What a person typed, exactly as it will be sent. Rows are added and given an outcome, never changed otherwise. */
export interface Entry {
  /** Id of the reading or finding, made at the tap. */
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly roundId: string;
  readonly kind: 'reading' | 'finding' | 'pick';
  readonly reading: EntryReading | null;
  readonly finding: VineFinding | null;
  /** The vine whose fruit went into the open bag; it is sent with the bag. */
  readonly pick?: { readonly targetId: string; readonly rowId: string; readonly ordinal: number };
  /** Words for lists, so that they can be drawn without the round. */
  readonly row: string;
  readonly vine: number;
  /** Given where vines stand without rows. */
  readonly place?: readonly [lon: number, lat: number];
  readonly at: string;
  /** 0 while only on this phone, 1 once the server has answered for it: an index key, hence a number. */
  readonly received: 0 | 1;
  readonly outcome: ReadingOutcome | null;
  /** True once it has left the phone, whether or not an answer came: from then on it can only be corrected. */
  readonly isTried?: boolean;
  /** A finding that was taken back after it had left the phone: the vine is read after all. */
  readonly isVoid?: boolean;
}

export type EntryReading = Pick<NewReading, 'id' | 'blockId' | 'roundId' | 'targetId' | 'rowId' | 'ordinal' | 'measureCode' | 'value' | 'unit' | 'valueTyped' | 'takenAt' | 'deviceId' | 'supersedes' | 'flags' | 'readBy' | 'seenAs'>;

export interface KeptRound {
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly round: FieldRound;
  readonly keptAt: string;
}

/** A photo of a vine, made small and without its place on earth before it is kept. */
export interface KeptPhoto {
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly roundId: string;
  readonly blockId: string;
  readonly rowId: string;
  readonly ordinal: number;
  readonly row: string;
  readonly vine: number;
  /** Given where vines stand without rows. */
  readonly place?: readonly [lon: number, lat: number];
  readonly note: string;
  readonly picture: Blob;
  readonly at: string;
  readonly received: 0 | 1;
  /** Why the server did not take it; it stays and is offered again. */
  readonly refusal?: string;
  /** The server's word for it, which the phone says in its own language. */
  readonly refusalCode?: string;
}

/** Somebody is done with a round, and the office does not know yet. */
export interface KeptClosing {
  readonly key: string;
  readonly estateId: string;
  readonly personId: string;
  readonly roundId: string;
  readonly at: string;
}

/** A bag closed with this phone. */
export interface KeptBag {
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly roundId: string;
  readonly zone: number;
  readonly code: string;
  readonly bag: NewBag;
  readonly at: string;
  readonly received: 0 | 1;
  readonly outcome: BagOutcome | null;
}

interface FieldSchema extends DBSchema {
  rounds: { key: string; value: KeptRound; indexes: { person: string } };
  lists: { key: string; value: { key: string; items: RoundSummary[]; at: string } };
  entries: { key: string; value: Entry; indexes: { received: number; round: string } };
  photos: { key: string; value: KeptPhoto; indexes: { received: number } };
  bags: { key: string; value: KeptBag; indexes: { received: number; code: string } };
  facts: { key: string; value: { key: string; value: unknown } };
  closings: { key: string; value: KeptClosing };
}

export type FieldDatabase = IDBPDatabase<FieldSchema>;

let opened: Promise<FieldDatabase> | null = null;

/** The browser gives no store at all, or will not open it. */
class NoStore extends Error {}

/** True of what the phone's own store answers when it is not given, was taken away, or has no room. */
export const isStoreFailure = (error: unknown): boolean => error instanceof NoStore || error instanceof DOMException;

/** Null where the phone's store failed: for what is tried again with the next sending. Other errors are thrown on. */
export async function unlessStoreFails<T>(work: Promise<T>): Promise<T | null> {
  try {
    return await work;
  } catch (error) {
    if (isStoreFailure(error)) return null;
    throw error;
  }
}

/** What the phone holds, or nothing where its store cannot be read: the self-test says so, and everything else goes on without. */
export const orNothing = <T, N>(reading: Promise<T>, nothing: N): Promise<T | N> => reading.catch(() => nothing);

/** The phone's own store. One connection a page; rejects where the browser gives none, and tries again the next time. */
export async function fieldDatabase(name = 'patchrow-field'): Promise<FieldDatabase> {
  opened ??= open(name).catch((error: unknown) => {
    opened = null;
    throw new NoStore('The browser gives no store.', { cause: error });
  });
  return opened;
}

const version = 3;
const parts = ['rounds', 'lists', 'entries', 'photos', 'bags', 'facts', 'closings'] as const;

/** A store that lacks a part, whatever left it so, is made whole under its next number; what it holds stays. */
async function open(name: string): Promise<FieldDatabase> {
  const database = await openAs(name, version).catch((error: unknown) => {
    // A newer program, or the mending below, has been here.
    if (error instanceof DOMException && error.name === 'VersionError') return openAs(name);
    throw error;
  });
  if (parts.every((part) => database.objectStoreNames.contains(part))) return database;
  database.close();
  return openAs(name, database.version + 1);
}

async function openAs(name: string, number?: number): Promise<FieldDatabase> {
  const database = await openDB<FieldSchema>(name, number, {
    upgrade: addMissing,
    // Another tab with a newer program must not wait for this one.
    blocking: (_now, _next, event) => {
      opened = null;
      (event.target as IDBDatabase).close();
    },
    terminated: () => void (opened = null),
  });
  expectAborts(unwrap(database), () => void (opened = null));
  return database;
}

/** By what is there, not by its number: nothing that exists is touched. */
function addMissing(database: FieldDatabase): void {
  const missing = new Set<string>(parts.filter((part) => !database.objectStoreNames.contains(part)));
  if (missing.has('rounds')) database.createObjectStore('rounds', { keyPath: 'id' }).createIndex('person', 'personId');
  if (missing.has('lists')) database.createObjectStore('lists', { keyPath: 'key' });
  if (missing.has('entries')) {
    const entries = database.createObjectStore('entries', { keyPath: 'id' });
    entries.createIndex('received', 'received');
    entries.createIndex('round', 'roundId');
  }
  if (missing.has('photos')) database.createObjectStore('photos', { keyPath: 'id' }).createIndex('received', 'received');
  if (missing.has('bags')) {
    const bags = database.createObjectStore('bags', { keyPath: 'id' });
    bags.createIndex('received', 'received');
    bags.createIndex('code', 'code');
  }
  if (missing.has('facts')) database.createObjectStore('facts', { keyPath: 'key' });
  if (missing.has('closings')) database.createObjectStore('closings', { keyPath: 'key' });
}

/**
 * Where a store breaks, a transaction ends twice: for the request that somebody waits for, and for the whole of it, where
 * often nobody does any more. The second must not come up as an error of the page; who awaits it is told all the same.
 * `lost`: the system ended the connection without a word, as phones do to a page that slept; the next use opens it anew.
 */
export function expectAborts(database: Pick<IDBDatabase, 'transaction'>, lost: () => void): void {
  const begin = database.transaction.bind(database);
  const note = (error: unknown) => error instanceof DOMException && (error.name === 'InvalidStateError' || error.name === 'UnknownError') && lost();
  database.transaction = (...args: Parameters<IDBDatabase['transaction']>) => {
    try {
      const transaction = begin(...args);
      wrap(transaction).done.catch(note);
      return transaction;
    } catch (error) {
      note(error);
      throw error;
    }
  };
}
