import { createPinia, setActivePinia } from 'pinia';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { ref } from 'vue';
import type { FieldMeasure, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import { useWalkActs } from '../../src/composables/useWalkActs.ts';
import { expectAborts, type Entry } from '../../src/offline/fieldDatabase.ts';
import { checkReadiness } from '../../src/offline/readiness.ts';
import { useFieldStore } from '../../src/stores/field.ts';

/** A phone's store that can run out of room in the ways browsers show it. */
const phone = vi.hoisted(() => ({
  held: new Map<string, { id?: string; key?: string }>(),
  /** null: all goes well. `at`: the request itself is declined, or only the whole transaction at its end. */
  fails: null as null | { name: string; at: 'request' | 'done'; isBroken: boolean },
  /** Bytes that a value may still have. */
  room: Infinity,
}));

vi.mock('../../src/offline/fieldDatabase.ts', async (original) => {
  const sound = await original<typeof import('../../src/offline/fieldDatabase.ts')>();
  const trouble = (): DOMException => new DOMException('no room', phone.fails?.name ?? 'QuotaExceededError');
  const read = <T>(value: T): Promise<T> => (phone.fails?.isBroken ? Promise.reject(trouble()) : Promise.resolve(value));
  const all = () => read([...phone.held.values()]);
  const write = (row: { id?: string; key?: string; value?: unknown }): Promise<void> => {
    if (phone.fails?.at === 'request' || (row.value instanceof Uint8Array && row.value.length > phone.room)) return Promise.reject(trouble());
    if (!phone.fails) phone.held.set(row.id ?? row.key!, row);
    return Promise.resolve();
  };
  const database = {
    transaction: () => ({ store: { add: write, put: write }, done: phone.fails ? Promise.reject(trouble()) : Promise.resolve() }),
    get: (_part: string, key: string) => read(phone.held.get(key)),
    getAll: all,
    getAllFromIndex: all,
    delete: (_part: string, key: string) => read(phone.held.delete(key)),
  };
  return { ...sound, fieldDatabase: () => Promise.resolve(database) };
});
vi.mock('../../src/offline/outbox.ts', async (original) => ({ ...(await original<object>()), sendWaiting: () => Promise.resolve({ sent: 0, reached: false }) }));

const measure = { code: 'clusterCount', unit: '1/vine', decimals: 0, minimum: 0, maximum: 200 } as FieldMeasure;
const stops = [1, 2].map((ordinal) => ({ targetId: `t${ordinal}`, rowId: 'r', rowLabel: '7', ordinal, reserve: null })) as WalkStop[];
const round = { id: 'w', blockId: 'b', stops } as unknown as FieldRound;

/** Stands at the first vine, with the next open one behind it. */
async function walk() {
  const field = useFieldStore();
  await field.begin('e', 'p');
  field.round = round;
  const [at, correcting] = [ref(0), ref<Entry | null>(null)];
  const acts = useWalkActs({ round: ref(round), stop: ref(stops[0]!), vine: ref({ rowId: 'r', rowLabel: '7', ordinal: 1, vineNumber: 1, isReserve: false }), measure: ref(measure), openIndex: ref(1), lastEntry: ref(null) }, { at, correcting, readBy: ref(null) });
  const type = async (text: string): Promise<void> => {
    acts.text.value = text;
    await acts.save();
  };
  return { field, acts, at, correcting, type };
}

const shown = (field: ReturnType<typeof useFieldStore>) => field.entries.map(({ reading }) => reading?.valueTyped);

beforeEach(() => {
  localStorage.clear();
  phone.held.clear();
  [phone.fails, phone.room] = [null, Infinity];
  setActivePinia(createPinia());
  vi.stubGlobal('fetch', () => Promise.reject(new TypeError('no network')));
});
afterEach(async () => {
  // What is sent after a tap ends before the network comes back.
  await new Promise((next) => setTimeout(next, 0));
  vi.unstubAllGlobals();
});

describe.each([
  { name: 'QuotaExceededError', at: 'request', isBroken: false },
  { name: 'QuotaExceededError', at: 'done', isBroken: false },
  { name: 'AbortError', at: 'done', isBroken: true },
  { name: 'AbortError', at: 'request', isBroken: true },
] as const)('a full phone that answers $name at the $at, its store broken: $isBroken', (fails) => {
  it('says that nothing was kept, keeps the number on the keypad, stands at its vine, and shows what it kept before', async () => {
    const { field, acts, at, type } = await walk();
    await type('31');
    expect([shown(field), acts.trouble.value, acts.text.value, at.value]).toEqual([['31'], null, '', 1]);
    phone.fails = fails;
    at.value = 0;
    await type('44');
    expect([acts.trouble.value, acts.text.value, at.value]).toEqual(['notKept', '44', 0]);
    expect(shown(field)).toEqual(['31']);
    phone.fails = null;
    await acts.save();
    expect([acts.trouble.value, acts.text.value]).toEqual([null, '']);
    expect(shown(field)).toEqual(['31', '44']);
    expect(phone.held.size).toBe(2);
  });

  it('a correction that was not kept stays a correction', async () => {
    const { acts, correcting, type } = await walk();
    phone.fails = fails;
    correcting.value = { id: 'first' } as Entry;
    await type('44');
    expect(correcting.value).toMatchObject({ id: 'first' });
    phone.fails = null;
    await acts.save();
    expect([...phone.held.values()]).toMatchObject([{ reading: { supersedes: 'first', value: 44 } }]);
  });
});

describe('the self-test', () => {
  const canWrite = async (): Promise<boolean> => (await checkReadiness({ estateId: 'e', personId: 'p' }, ['w', 'v'], new Date('2026-09-01T07:00:00Z'))).canWrite;

  it('writes as much as a day’s readings, and leaves nothing of it', async () => {
    expect(await canWrite()).toBe(true);
    expect(phone.held.size).toBe(0);
  });

  it('of two screens at once spoils neither', async () => {
    expect(await Promise.all([canWrite(), canWrite()])).toEqual([true, true]);
    expect(phone.held.size).toBe(0);
  });

  it('fails where a line still fits and a day does not, or where the store breaks', async () => {
    phone.room = 100_000;
    expect(await canWrite()).toBe(false);
    [phone.room, phone.fails] = [Infinity, { name: 'AbortError', at: 'done', isBroken: true }];
    expect(await canWrite()).toBe(false);
  });
});

describe('a transaction that breaks', () => {
  it('is told to who waits for it, and to nobody else', async () => {
    class Breaking extends EventTarget {
      readonly error = new DOMException('no room', 'AbortError');
    }
    vi.stubGlobal('IDBTransaction', Breaking);
    for (const name of ['IDBDatabase', 'IDBObjectStore', 'IDBIndex', 'IDBCursor', 'IDBRequest']) vi.stubGlobal(name, class {});
    const unheard: unknown[] = [];
    const hear = (error: unknown): void => void unheard.push(error);
    process.on('unhandledRejection', hear);
    const broken = new Breaking();
    const database = { transaction: () => broken as unknown as IDBTransaction };
    let lost = 0;
    expectAborts(database, () => lost++);
    expect(database.transaction()).toBe(broken);
    broken.dispatchEvent(new Event('abort'));
    await new Promise((next) => setTimeout(next, 20));
    process.off('unhandledRejection', hear);
    expect(unheard).toEqual([]);
    expect(lost).toBe(0);
    const { wrap } = await import('idb');
    await expect(wrap(broken as unknown as IDBTransaction).done).rejects.toThrow('no room');
  });

  it('of a connection that the system ended while the phone slept has the next use open it anew', () => {
    const database = { transaction: (): IDBTransaction => { throw new DOMException('The connection is closing.', 'InvalidStateError'); } };
    let lost = 0;
    expectAborts(database, () => lost++);
    expect(() => database.transaction()).toThrow('closing');
    expect(lost).toBe(1);
    const strange = { transaction: (): IDBTransaction => { throw new DOMException('No such part.', 'NotFoundError'); } };
    expectAborts(strange, () => lost++);
    expect(() => strange.transaction()).toThrow('No such part');
    expect(lost).toBe(1);
  });
});
