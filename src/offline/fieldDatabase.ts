import { openDB, type DBSchema, type IDBPDatabase } from 'idb';
import type { NewReading, ReadingOutcome, VineFinding } from '../../shared/contracts/readings.ts';
import type { FieldRound, RoundSummary } from '../../shared/contracts/rounds.ts';

/** What a person typed, exactly as it will be sent. Rows are added and given an outcome, never changed otherwise. */
export interface Entry {
  /** Id of the reading or finding, made at the tap. */
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly roundId: string;
  readonly kind: 'reading' | 'finding';
  readonly reading: EntryReading | null;
  readonly finding: VineFinding | null;
  /** Words for lists, so that they can be drawn without the round. */
  readonly row: string;
  readonly vine: number;
  readonly at: string;
  /** 0 while only on this phone, 1 once the server has answered for it: an index key, hence a number. */
  readonly received: 0 | 1;
  readonly outcome: ReadingOutcome | null;
}

export type EntryReading = Pick<NewReading, 'id' | 'blockId' | 'roundId' | 'targetId' | 'rowId' | 'ordinal' | 'measureCode' | 'value' | 'unit' | 'valueTyped' | 'takenAt' | 'deviceId' | 'supersedes' | 'flags'>;

export interface KeptRound {
  readonly id: string;
  readonly estateId: string;
  readonly personId: string;
  readonly round: FieldRound;
  readonly keptAt: string;
}

interface FieldSchema extends DBSchema {
  rounds: { key: string; value: KeptRound; indexes: { person: string } };
  lists: { key: string; value: { key: string; items: RoundSummary[]; at: string } };
  entries: { key: string; value: Entry; indexes: { received: number; round: string } };
  facts: { key: string; value: { key: string; value: unknown } };
}

export type FieldDatabase = IDBPDatabase<FieldSchema>;

let opened: Promise<FieldDatabase> | null = null;

/** The phone's own store. One connection a page. */
export function fieldDatabase(name = 'patchrow-field'): Promise<FieldDatabase> {
  opened ??= openDB<FieldSchema>(name, 1, {
    upgrade(database) {
      database.createObjectStore('rounds', { keyPath: 'id' }).createIndex('person', 'personId');
      database.createObjectStore('lists', { keyPath: 'key' });
      const entries = database.createObjectStore('entries', { keyPath: 'id' });
      entries.createIndex('received', 'received');
      entries.createIndex('round', 'roundId');
      database.createObjectStore('facts', { keyPath: 'key' });
    },
    // Another tab with a newer program must not wait for this one.
    blocking: (_now, _next, event) => {
      opened = null;
      (event.target as IDBDatabase).close();
    },
    terminated: () => void (opened = null),
  });
  return opened;
}
