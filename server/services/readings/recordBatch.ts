import type { Transaction } from 'objection';
import type { z } from 'zod';
import { newReading, vineFinding, type BatchAnswer, type NewReading, type ReadingOutcome } from '../../../shared/contracts/readings.ts';
import { storable } from '../../../shared/contracts/storableText.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { loadBatchContext, type BatchContext } from './batchContext.ts';
import { findConflicts } from './findConflicts.ts';
import { matchPaperAndPhone } from './paperAndPhone.ts';
import { clockOffMs, clockToleranceMs, refusalOf, seasonOf } from './refuseReading.ts';
import { storeFindings, takeBackMarks } from './storeFindings.ts';

/**
 * Stores a batch of readings. Append-only and safe to repeat: a reading whose id is known is received again, never
 * doubled; one whose id is known with another content is refused and the first stays. Each item has its own outcome,
 * so that one bad line never holds back the rest of a day.
 */
export async function recordBatch(access: Access, input: { readings: unknown[]; findings: unknown[] }, now: Date): Promise<BatchAnswer> {
  const reach = requireReach(access, 'readings.record', 'own');
  return Reading.transaction(async (trx) => {
    // One batch of an estate at a time: a retry that overtakes its first sending, or two phones at one vine, must see each other.
    await trx.raw('select pg_advisory_xact_lock(hashtextextended(?, 0))', [`readings ${access.estateId}`]);
    const [readings, findings] = [input.readings.map((raw) => parse(newReading, raw)), input.findings.map((raw) => parse(vineFinding, raw))];
    const found = findings.flatMap(({ item }) => item ?? []);
    const context = await loadBatchContext(trx, access, { readings: readings.flatMap(({ item }) => item ?? []), findings: found, ownRoundsOnly: reach === 'own', now });
    const outcomes = new Map<string, ReadingOutcome>();
    const fresh: NewReading[] = [];
    for (const { item: reading, outcome } of readings) {
      if (!reading || outcomes.has(reading.id)) continue;
      const refusal = refusalOf(reading, context, fresh);
      const stored = context.known.get(reading.id);
      if (stored === undefined && refusal === null) fresh.push(reading);
      outcomes.set(reading.id, stored ? repeatOutcome(reading, stored) : refusal === null ? outcome : { id: reading.id, state: 'refused', ...refusal });
    }
    const known = await matchPaperAndPhone(trx, access, fresh);
    for (const id of known) outcomes.set(id, { id, state: 'received', reason: 'The phone had sent this value already.' });
    const kept = fresh.filter(({ id }) => !known.has(id));
    await insertReadings(trx, access, kept, context);
    await openRounds(trx, access, kept);
    for (const id of [...(await findConflicts(trx, access, kept)), ...(await stillOpen(trx, access, [...context.known.keys()]))]) if (outcomes.has(id)) outcomes.set(id, { id, state: 'conflict', reason: null });
    const noted = await storeFindings(trx, access, found, context);
    await takeBackMarks(trx, access, kept.map(({ id }) => id));
    if (kept.length > 0) await writeAudit(trx, access, { action: 'readings.record', subjectType: 'readings', subjectId: kept[0]!.id, after: { count: kept.length, rounds: [...new Set(kept.map((reading) => reading.roundId))] } });
    return {
      outcomes: readings.map(({ item, outcome }) => (item ? outcomes.get(item.id)! : outcome)),
      findings: findings.map(({ item, outcome }) => (item ? noted.find(({ id }) => id === item.id)! : outcome)),
      serverTime: now.toISOString(),
    };
  });
}

interface Parsed<Item> {
  item: Item | null;
  outcome: ReadingOutcome;
}

function parse<Item extends { id: string }>(contract: z.ZodType<Item>, raw: unknown): Parsed<Item> {
  const parsed = storable(contract).safeParse(raw);
  if (parsed.success) return { item: parsed.data, outcome: { id: parsed.data.id, state: 'received', reason: null } };
  const id = typeof raw === 'object' && raw !== null && 'id' in raw && typeof raw.id === 'string' ? raw.id : '';
  return { item: null, outcome: { id, state: 'refused', reason: parsed.error.issues.map((issue) => `${issue.path.join('.') || 'reading'}: ${issue.message}`).join('; ') } };
}

function repeatOutcome(reading: NewReading, stored: Reading): ReadingOutcome {
  const same = stored.value === reading.value && stored.measureCode === reading.measureCode && stored.rowId === reading.rowId && stored.ordinal === reading.ordinal;
  return same
    ? { id: reading.id, state: 'received', reason: null }
    : {
        id: reading.id,
        state: 'refused',
        code: 'otherContent',
        reason: 'A reading with this id is stored with another value. The first stays; send a correction under an id of its own.',
      };
}

/** A walk that began out of reach: its first reading tells that it is under way. */
async function openRounds(trx: Transaction, access: Access, readings: readonly NewReading[]): Promise<void> {
  const ids = [...new Set(readings.flatMap(({ roundId }) => roundId ?? []))];
  if (ids.length === 0) return;
  const opened = (await Round.query(trx).where({ estateId: access.estateId, state: 'sent' }).whereIn('id', ids).patch({ state: 'open' }).returning('id')) as unknown as { id: string }[];
  for (const { id } of opened) await writeAudit(trx, access, { action: 'rounds.open', subjectType: 'round', subjectId: id, before: { state: 'sent' }, after: { state: 'open' } });
}

/** Of readings that were known before, those of which a conflict is still open. */
async function stillOpen(trx: Transaction, access: Access, ids: string[]): Promise<string[]> {
  if (ids.length === 0) return [];
  const open = await ReadingConflict.query(trx).where({ estateId: access.estateId, state: 'open' }).whereIn('kind', ['sameVine', 'sameTarget']).whereRaw('reading_ids && ?::uuid[]', [ids]);
  return ids.filter((id) => open.some(({ readingIds }) => readingIds.includes(id)));
}

async function insertReadings(trx: Transaction, access: Access, readings: NewReading[], context: BatchContext): Promise<void> {
  if (readings.length === 0) return;
  const { now } = context;
  await Reading.query(trx).insert(
    readings.map(({ readBy, ...reading }) => {
      const isSkewed = Math.abs(clockOffMs(reading, now)) > clockToleranceMs || Date.parse(reading.takenAt) > now.getTime() + clockToleranceMs;
      return {
        ...reading,
        estateId: access.estateId,
        seasonId: seasonOf({ ...reading, readBy }, context)!,
        personId: readBy ?? access.personId,
        typedBy: readBy === null || readBy === access.personId ? null : access.personId,
        takenAt: new Date(reading.takenAt),
        deviceTime: reading.deviceTime === null ? null : new Date(reading.deviceTime),
        flags: isSkewed ? [...reading.flags, 'clock'] : reading.flags,
        state: reading.source === 'lab' ? ('provisional' as const) : ('checked' as const),
        receivedAt: now,
      };
    }),
  );
  await trx.raw(
    `update readings r set position = t.position from targets t
     where t.estate_id = r.estate_id and t.id = r.target_id and t.row_id = r.row_id and t.ordinal = r.ordinal and r.estate_id = ? and r.id = any(?)`,
    [access.estateId, readings.map((reading) => reading.id)],
  );
}
