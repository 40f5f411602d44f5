import type { BatchAnswer } from '../../shared/contracts/readings.ts';
import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type Entry } from './fieldDatabase.ts';
import { oneAtATime } from './oneAtATime.ts';
import { patienceMs } from './patience.ts';

/** Readings a batch; small enough to pass a weak signal whole. */
const batchSize = 100;

/** Adds what was typed. When this resolves, it is on the phone and survives the phone's restart. */
export async function addEntries(entries: readonly Entry[]): Promise<void> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  await Promise.all([...entries.map((entry) => transaction.store.add(structuredClone(entry))), transaction.done]);
}

/** What has left this page, also where a full phone could not note it. */
const left = new Set<string>();

/** Takes back what never left the phone, or was refused. Answers false when the server may have it: then only a correction helps. */
export async function takeBack(ids: readonly string[]): Promise<boolean> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  const entries = await Promise.all(ids.map((id) => transaction.store.get(id)));
  const isFree = entries.every((entry) => entry?.received === 0 && (!(entry.isTried || left.has(entry.id)) || entry.outcome?.state === 'refused'));
  if (isFree) await Promise.all(ids.map((id) => transaction.store.delete(id)));
  await transaction.done;
  return isFree;
}

/** Sets a finding aside that has left the phone already; the reading that follows takes the mark back on the server. */
export async function setAside(id: string): Promise<void> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  const entry = await transaction.store.get(id);
  await Promise.all([entry && transaction.store.put({ ...entry, isVoid: true }), transaction.done]);
}

export async function entriesOfRound(personId: string, roundId: string): Promise<Entry[]> {
  const entries = await (await fieldDatabase()).getAllFromIndex('entries', 'round', roundId);
  return entries.filter((entry) => entry.personId === personId).sort((a, b) => a.at.localeCompare(b.at));
}

export async function allEntries(personId: string): Promise<Entry[]> {
  const entries = await (await fieldDatabase()).getAll('entries');
  return entries.filter((entry) => entry.personId === personId && entry.kind !== 'pick').sort((a, b) => b.at.localeCompare(a.at));
}

/** Of others who share this phone, or of all while nobody is signed in (''): how much of theirs waits here. */
export async function waitingOfOthers(personId: string): Promise<number> {
  return (await (await fieldDatabase()).getAllFromIndex('entries', 'received', 0)).filter((entry) => entry.kind !== 'pick' && entry.personId !== personId && entry.outcome?.state !== 'refused').length;
}

/** What has not reached the server yet; what it refused is told apart and does not count. */
export async function countWaiting(personId: string): Promise<number> {
  return (await (await fieldDatabase()).getAllFromIndex('entries', 'received', 0)).filter((entry) => entry.kind !== 'pick' && entry.personId === personId && entry.outcome?.state !== 'refused').length;
}

export interface SendResult {
  readonly sent: number;
  readonly reached: boolean;
}

/**
 * Sends what waits, batch by batch. May be called at any time and any number of times: one run at a time, ids were made
 * on the phone, and the server stores an id once. An entry counts as received only when the server answered for it by name.
 */
export const sendWaiting = oneAtATime((personId: string, now: () => Date) => sendAll({ isChosen: (entry) => entry.personId === personId, isForOthers: false, now }));

/**
 * Sends in their name what others left on this phone, when they cannot sign in any more: each reading stays theirs, and who
 * brought it is noted beside.
 */
export const sendForOthers = oneAtATime((who: { personId: string; estateId: string }, now: () => Date) => sendAll({ isChosen: (entry) => entry.personId !== who.personId && entry.estateId === who.estateId, isForOthers: true, now }));

interface Sending {
  readonly isChosen: (entry: Entry) => boolean;
  readonly isForOthers: boolean;
  readonly now: () => Date;
}

async function sendAll({ isChosen, isForOthers, now }: Sending): Promise<SendResult> {
  // Where the phone itself says that there is no network nothing is tried, so that what was typed can still be taken back.
  if (!navigator.onLine) return { sent: 0, reached: false };
  let sent = 0;
  // What the server refuses stays on the phone with its reason and is offered again next time, not in this run.
  const tried = new Set<string>();
  for (;;) {
    const waiting = (await (await fieldDatabase()).getAllFromIndex('entries', 'received', 0)).filter((entry) => entry.kind !== 'pick' && isChosen(entry) && !tried.has(entry.id)).sort((a, b) => a.at.localeCompare(b.at));
    const estateId = waiting[0]?.estateId;
    if (estateId === undefined) return { sent, reached: true };
    const wanted = waiting.filter((entry) => entry.estateId === estateId).slice(0, batchSize);
    wanted.forEach(({ id }) => tried.add(id));
    const batch = await markTried(wanted);
    if (batch.length === 0) continue;
    try {
      const answer = await post(estateId, isForOthers ? batch.map(inTheirName) : batch, now());
      sent += await settle(batch, isForOthers ? withoutRefused(answer) : answer);
    } catch (error) {
      if (error instanceof HttpProblem) return { sent, reached: !error.isOffline };
      throw error;
    }
  }
}

function inTheirName(entry: Entry): Entry {
  const { reading, finding, personId } = entry;
  return { ...entry, reading: reading && { ...reading, readBy: reading.readBy ?? personId }, finding: finding && { ...finding, readBy: finding.readBy ?? personId } };
}

/**
 * Noted before it leaves, since an answer may be lost on the way back. What was taken back meanwhile does not go. A phone
 * without room cannot note it and sends all the same: what has been received is what makes room again.
 */
async function markTried(batch: readonly Entry[]): Promise<Entry[]> {
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  const stored = (await Promise.all(batch.map(({ id }) => transaction.store.get(id)))).filter((entry) => entry !== undefined);
  for (const { id } of stored) left.add(id);
  const writes = stored.filter(({ isTried }) => !isTried).map(async (entry) => transaction.store.put({ ...entry, isTried: true }));
  await Promise.allSettled([...writes, transaction.done]);
  return stored;
}

function post(estateId: string, batch: readonly Entry[], now: Date): Promise<BatchAnswer> {
  return http.post<BatchAnswer>(`/api/estates/${estateId}/readings`, {
    readings: batch.flatMap(({ reading }) => (reading ? [{ ...reading, deviceTime: now.toISOString(), source: 'field' }] : [])),
    findings: batch.flatMap(({ finding }) => (finding ? [finding] : [])),
  }, { withinMs: patienceMs });
}

/** What is refused in somebody's name may be taken from themselves: it waits for them as before. */
function withoutRefused({ outcomes, findings, ...rest }: BatchAnswer): BatchAnswer {
  const isTaken = ({ state }: { state: string }) => state !== 'refused';
  return { ...rest, outcomes: outcomes.filter(isTaken), findings: findings.filter(isTaken) };
}

/** Notes what the server said. A phone without room cannot, and asks again next time; what goes after the readings may make room. */
async function settle(batch: readonly Entry[], answer: BatchAnswer): Promise<number> {
  const outcomes = new Map([...answer.outcomes, ...answer.findings].map((outcome) => [outcome.id, outcome]));
  const transaction = (await fieldDatabase()).transaction('entries', 'readwrite', { durability: 'strict' });
  const answered = batch.filter(({ id }) => outcomes.has(id));
  const writes = answered.map(async (entry) => {
    const [outcome, stored] = [outcomes.get(entry.id)!, await transaction.store.get(entry.id)];
    await transaction.store.put({ ...(stored ?? entry), received: outcome.state === 'refused' ? 0 : 1, isTried: true, outcome });
  });
  const isNoted = (await Promise.allSettled([...writes, transaction.done])).every(({ status }) => status === 'fulfilled');
  return isNoted ? answered.filter(({ id }) => outcomes.get(id)!.state !== 'refused').length : 0;
}
