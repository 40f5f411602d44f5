import type { FieldRound, RoundSummary } from '../../shared/contracts/rounds.ts';
import { fieldDatabase, type KeptRound } from './fieldDatabase.ts';

interface Owner {
  readonly estateId: string;
  readonly personId: string;
}

/** People who share a phone each keep their own copy of a round. */
const roundKey = ({ personId }: Owner, roundId: string) => `${personId}|${roundId}`;

/** Puts a day's work on the phone. */
export async function keepRound(owner: Owner, round: FieldRound, now: Date): Promise<void> {
  const database = await fieldDatabase();
  await database.put('rounds', { id: roundKey(owner, round.id), ...owner, round: structuredClone(round), keptAt: now.toISOString() });
}

export async function keptRound(owner: Owner, roundId: string): Promise<KeptRound | null> {
  const kept = await (await fieldDatabase()).get('rounds', roundKey(owner, roundId));
  return kept && kept.personId === owner.personId && kept.estateId === owner.estateId ? kept : null;
}

/** Drops rounds that are no longer sent to this person, unless something of them still waits on the phone. */
export async function dropOtherRounds(owner: Owner, keep: readonly string[]): Promise<void> {
  const database = await fieldDatabase();
  for (const kept of await database.getAllFromIndex('rounds', 'person', owner.personId)) {
    if (kept.estateId !== owner.estateId || keep.includes(kept.round.id)) continue;
    const waiting = (await database.getAllFromIndex('entries', 'round', kept.round.id)).some(({ received }) => received === 0);
    if (!waiting) await database.delete('rounds', kept.id);
  }
}

const listKey = ({ estateId, personId }: Owner) => `${estateId}|${personId}`;

export async function keepList(owner: Owner, items: readonly RoundSummary[], now: Date): Promise<void> {
  await (await fieldDatabase()).put('lists', { key: listKey(owner), items: structuredClone([...items]), at: now.toISOString() });
}

export async function keptList(owner: Owner): Promise<{ items: RoundSummary[]; at: string } | null> {
  return (await (await fieldDatabase()).get('lists', listKey(owner))) ?? null;
}
