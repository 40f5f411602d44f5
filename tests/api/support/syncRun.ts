import { randomUUID } from 'node:crypto';
import { seededRandom, type Random } from '../../../shared/analysis/random.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { BatchAnswer } from '../../../shared/contracts/readings.ts';
import type { FieldRoundMade } from './makeFieldRound.ts';
import type { Agent } from './testApp.ts';

type Sent = { id: string } & Record<string, unknown>;

interface Tap {
  reading: Sent;
  person: number;
  vine: number;
  value: number;
  /** Id that this tap corrects. */
  corrects: string | null;
}

/** What a phone keeps: what was tapped, and for what the server answered by name. Sending forgets nothing else. */
class Phone {
  readonly stored: Tap[] = [];
  readonly received = new Set<string>();
  isGone = false;
  private readonly agent: Agent;
  private readonly path: string;

  constructor(agent: Agent, path: string) {
    this.agent = agent;
    this.path = path;
  }

  waiting(): Tap[] {
    return this.stored.filter(({ reading }) => !this.received.has(reading.id));
  }

  /** One sending. `cut`: the request never leaves, or its answer never comes back. */
  async send(size: number, cut: 'none' | 'before' | 'after' = 'none'): Promise<void> {
    const batch = this.waiting().slice(0, size);
    if (batch.length === 0 || cut === 'before') return;
    const answer = await this.agent.post(this.path, { readings: batch.map(({ reading }) => ({ ...reading, deviceTime: new Date().toISOString() })) });
    if (cut === 'after') return;
    for (const { id, state } of (answer.body as BatchAnswer).outcomes) if (state !== 'refused') this.received.add(id);
  }
}

export interface SyncRunResult {
  taps: number;
  requests: number;
  /** Taps of which the server holds nothing. */
  lost: number;
  /** Readings that count beyond the one a person made of a vine, and that no card lists. */
  doubled: number;
  /** Vines of two people without a card, and cards on which nothing ever differed: a card names what stands today, and a correction may have settled the difference that opened it. */
  conflictsMissing: number;
  conflictsInvented: number;
}

/** A day of several phones in a seeded order of taps, cuts, retries, reloads, overtaking sendings, corrections, a lost phone and its paper. */
export async function syncRun(made: FieldRoundMade, read: () => Promise<StoredReading[]>, seed: number): Promise<SyncRunResult> {
  const random = seededRandom(seed);
  const path = `/api/estates/${made.estateId}/readings`;
  const phones = made.crew.map(({ agent }) => new Phone(agent, path));
  const taps: Tap[] = [];
  let requests = 0;
  const lostPhone = random() < 0.5 ? Math.floor(random() * phones.length) : -1;
  const steps = 14 + Math.floor(random() * 14);
  for (let step = 0; step < steps; step++) {
    const person = Math.floor(random() * phones.length);
    const phone = phones[person]!;
    if (random() < 0.6) {
      tap(made, { random, taps, phone, person });
      continue;
    }
    requests++;
    const size = 1 + Math.floor(random() * 6);
    await [() => phone.send(size), () => phone.send(size, 'before'), () => phone.send(size, 'after'), () => five(phone, size), () => Promise.all([phone.send(size), phone.send(size + 2)])][Math.floor(random() * 5)]!();
  }
  if (lostPhone >= 0) await typePaper(made, { phone: phones[lostPhone]!, person: lostPhone, path });
  // A lost phone is found again half of the time, and sends everything it holds.
  if (lostPhone >= 0 && random() < 0.5) phones[lostPhone]!.isGone = false;
  await Promise.all(phones.filter(({ isGone }) => !isGone).map((phone) => drain(phone)));
  return { taps: taps.length, requests, ...compare(taps, await read(), await openCards(made)) };
}

async function five(phone: Phone, size: number): Promise<void> {
  for (let i = 0; i < 4; i++) await phone.send(size, 'after');
  await phone.send(size);
}

async function drain(phone: Phone): Promise<void> {
  for (let i = 0; i < 40 && phone.waiting().length > 0; i++) await phone.send(5);
}

function tap(made: FieldRoundMade, { random, taps, phone, person }: { random: Random; taps: Tap[]; phone: Phone; person: number }): void {
  const own = taps.filter((one) => one.person === person);
  const corrected = random() < 0.12 ? own.find(({ reading }) => !own.some(({ corrects }) => corrects === reading.id)) : undefined;
  // Three quarters of the vines are one's own, the rest are everybody's.
  const free = Array.from({ length: made.targets.length }, (_, vine) => vine).filter((vine) => (vine % 4 === 3 || vine % made.crew.length === person) && !own.some((one) => one.vine === vine));
  const vine = corrected?.vine ?? free[Math.floor(random() * free.length)];
  if (vine === undefined) return;
  // Even values for one person and odd for another, so that two people never agree by chance.
  const value = 10 + 2 * Math.floor(random() * 20) + (person % 2);
  const reading = made.reading(vine, { id: randomUUID(), value, supersedes: corrected?.reading.id ?? null });
  const one = { reading, person, vine, value, corrects: corrected?.reading.id ?? null };
  taps.push(one);
  phone.stored.push(one);
}

/** The phone is gone; somebody types its sheet, on which every vine stands with its last value. */
async function typePaper(made: FieldRoundMade, { phone, person, path }: { phone: Phone; person: number; path: string }): Promise<void> {
  phone.isGone = true;
  const last = phone.stored.filter(({ reading }) => !phone.stored.some(({ corrects }) => corrects === reading.id));
  const readings = last.map(({ vine, value }) => made.reading(vine, { id: randomUUID(), value, source: 'paper', readBy: made.crew[person]!.id }));
  for (let i = 0; i < 2; i++) await made.manager.post(path, { readings });
}

async function openCards(made: FieldRoundMade): Promise<string[][]> {
  const { items } = (await made.manager.get(`/api/estates/${made.estateId}/conflicts`)).body as { items: { kind: string; readingIds: string[] }[] };
  return items.filter(({ kind }) => kind === 'sameVine').map(({ readingIds }) => readingIds);
}

export interface StoredReading {
  id: string;
  targetId: string;
  personId: string;
  value: number;
  /** The reading that this one corrects. */
  supersedes: string | null;
  /** Not corrected by another and not left out. */
  counts: boolean;
}

function compare(taps: readonly Tap[], stored: readonly StoredReading[], cards: readonly string[][]): Omit<SyncRunResult, 'taps' | 'requests'> {
  const last = taps.filter(({ reading }) => !taps.some(({ corrects }) => corrects === reading.id));
  const counting = stored.filter(({ counts }) => counts);
  const target = (vine: Tap) => vine.reading.targetId as string;
  const lost = last.filter((tapped) => !counting.some(({ targetId, value }) => targetId === target(tapped) && value === tapped.value)).length;
  const onCard = new Set(cards.flat());
  const ofPerson = [...groupBy(counting, ({ personId, targetId }) => `${personId} ${targetId}`).values()];
  const doubled = ofPerson.reduce((sum, same) => sum + same.slice(1).filter(({ id }) => !onCard.has(id)).length, 0);
  const people = groupBy(last, target);
  const shared = [...people].filter(([, tapped]) => new Set(tapped.map(({ person }) => person)).size > 1).map(([id]) => id);
  const byId = new Map(stored.map((one) => [one.id, one]));
  const carded = new Set(cards.map((ids) => byId.get(ids[0]!)!.targetId));
  return {
    lost, doubled,
    conflictsMissing: shared.filter((id) => !carded.has(id)).length,
    conflictsInvented: cards.filter((ids) => ids.length < 2 || new Set(ids.flatMap((id) => chain(byId, id)).map(({ personId, value }) => `${personId} ${value}`)).size < 2).length,
  };
}

/** A reading and all that it corrects. */
function chain(byId: ReadonlyMap<string, StoredReading>, id: string): StoredReading[] {
  const reading = byId.get(id)!;
  return [reading, ...(reading.supersedes === null ? [] : chain(byId, reading.supersedes))];
}
