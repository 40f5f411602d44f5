import type { BatchAnswer } from '../../shared/contracts/readings.ts';
import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type Entry } from './fieldDatabase.ts';

/** Readings a batch; small enough to pass a weak signal whole. */
const batchSize = 100;

/** Adds what was typed. When this resolves, it is on the phone and survives the phone's restart. */
export async function addEntries(entries: readonly Entry[]): Promise<void> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  for (const entry of entries) void transaction.store.add(structuredClone(entry));
  await transaction.done;
}

/** Takes back what has not been sent. Answers false when the server has it already: then only a correction helps. */
export async function takeBack(ids: readonly string[]): Promise<boolean> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  const entries = await Promise.all(ids.map((id) => transaction.store.get(id)));
  const isFree = entries.every((entry) => entry?.received === 0 && !inFlight.has(entry.id));
  if (isFree) await Promise.all(ids.map((id) => transaction.store.delete(id)));
  await transaction.done;
  return isFree;
}

export async function entriesOfRound(roundId: string): Promise<Entry[]> {
  const entries = await (await fieldDatabase()).getAllFromIndex('entries', 'round', roundId);
  return entries.sort((a, b) => a.at.localeCompare(b.at));
}

export async function allEntries(personId: string): Promise<Entry[]> {
  const entries = await (await fieldDatabase()).getAll('entries');
  return entries.filter((entry) => entry.personId === personId).sort((a, b) => b.at.localeCompare(a.at));
}

/** What has not reached the server yet; what it refused is told apart and does not count. */
export async function countWaiting(personId: string): Promise<number> {
  return (await (await fieldDatabase()).getAllFromIndex('entries', 'received', 0)).filter((entry) => entry.personId === personId && entry.outcome?.state !== 'refused').length;
}

const inFlight = new Set<string>();
let sending: Promise<SendResult> | null = null;

export interface SendResult {
  readonly sent: number;
  readonly reached: boolean;
}

/**
 * Sends what waits, batch by batch. May be called at any time and any number of times: one run at a time, ids were made
 * on the phone, and the server stores an id once. An entry counts as received only when the server answered for it by name.
 */
export function sendWaiting(personId: string, now: () => Date): Promise<SendResult> {
  sending ??= sendAll(personId, now).finally(() => (sending = null));
  return sending;
}

async function sendAll(personId: string, now: () => Date): Promise<SendResult> {
  let sent = 0;
  // What the server refuses stays on the phone with its reason and is offered again next time, not in this run.
  const tried = new Set<string>();
  for (;;) {
    const waiting = (await (await fieldDatabase()).getAllFromIndex('entries', 'received', 0)).filter((entry) => entry.personId === personId && !tried.has(entry.id)).sort((a, b) => a.at.localeCompare(b.at));
    const estateId = waiting[0]?.estateId;
    if (estateId === undefined) return { sent, reached: true };
    const batch = waiting.filter((entry) => entry.estateId === estateId).slice(0, batchSize);
    batch.forEach(({ id }) => inFlight.add(id));
    try {
      sent += await settle(batch, await post(estateId, batch, now()));
      batch.forEach(({ id }) => tried.add(id));
    } catch (error) {
      if (error instanceof HttpProblem) return { sent, reached: !error.isOffline };
      throw error;
    } finally {
      batch.forEach(({ id }) => inFlight.delete(id));
    }
  }
}

function post(estateId: string, batch: readonly Entry[], now: Date): Promise<BatchAnswer> {
  return http.post<BatchAnswer>(`/api/estates/${estateId}/readings`, {
    readings: batch.flatMap(({ reading }) => (reading ? [{ ...reading, deviceTime: now.toISOString(), source: 'field' }] : [])),
    findings: batch.flatMap(({ finding }) => (finding ? [finding] : [])),
  });
}

async function settle(batch: readonly Entry[], answer: BatchAnswer): Promise<number> {
  const outcomes = new Map([...answer.outcomes, ...answer.findings].map((outcome) => [outcome.id, outcome]));
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  let received = 0;
  for (const entry of batch) {
    const outcome = outcomes.get(entry.id);
    if (!outcome) continue;
    const isStored = outcome.state !== 'refused';
    if (isStored) received++;
    void transaction.store.put({ ...entry, received: isStored ? 1 : 0, outcome });
  }
  await transaction.done;
  return received;
}
