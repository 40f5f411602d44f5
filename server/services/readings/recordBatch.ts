import type { Transaction } from 'objection';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import { newReading, type BatchAnswer, type NewReading, type ReadingOutcome, type VineFinding } from '../../../shared/contracts/readings.ts';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { writeVines } from '../../models/Vine.ts';
import { requireReach } from '../../access/access.ts';
import { findConflicts } from './conflicts.ts';
import { loadBatchContext, type BatchContext } from './batchContext.ts';

const clockToleranceMs = 5 * 60_000;

/**
 * Stores a batch of readings. Append-only and safe to repeat: a reading whose id is known is received again, never
 * doubled; one whose id is known with another content is refused and the first stays. Each item has its own outcome,
 * so that one bad line never holds back the rest of a day.
 */
export async function recordBatch(access: Access, input: { readings: unknown[]; findings: VineFinding[] }, now: Date): Promise<BatchAnswer> {
  const reach = requireReach(access, 'readings.record', 'own');
  return Reading.transaction(async (trx) => {
    const parsed = input.readings.map(parseReading);
    const valid = parsed.flatMap((item) => (item.reading ? [item.reading] : []));
    const context = await loadBatchContext(trx, access, { readings: valid, findings: input.findings, ownRoundsOnly: reach === 'own' });
    const outcomes = new Map<string, ReadingOutcome>();
    const fresh: NewReading[] = [];
    for (const { reading, outcome } of parsed) {
      if (!reading) continue;
      const reason = refusalOf(reading, context);
      if (reason !== null) outcomes.set(reading.id, { id: reading.id, state: 'refused', reason });
      else if (context.known.has(reading.id)) outcomes.set(reading.id, repeatOutcome(reading, context.known.get(reading.id)!));
      else if (outcomes.has(reading.id)) continue;
      else {
        fresh.push(reading);
        outcomes.set(reading.id, outcome);
      }
    }
    await insertReadings(trx, access, fresh, context, now);
    for (const id of await findConflicts(trx, access, fresh)) outcomes.set(id, { id, state: 'conflict', reason: null });
    const findings = await storeFindings(trx, access, input.findings, context);
    if (fresh.length > 0) await writeAudit(trx, access, { action: 'readings.record', subjectType: 'readings', subjectId: fresh[0]!.id, after: { count: fresh.length, rounds: [...new Set(fresh.map((reading) => reading.roundId))] } });
    return { outcomes: parsed.map(({ reading, outcome }) => (reading ? outcomes.get(reading.id)! : outcome)), findings, serverTime: now.toISOString() };
  });
}

interface ParsedItem {
  reading: NewReading | null;
  outcome: ReadingOutcome;
}

function parseReading(raw: unknown): ParsedItem {
  const parsed = newReading.safeParse(raw);
  if (parsed.success) return { reading: parsed.data, outcome: { id: parsed.data.id, state: 'received', reason: null } };
  const id = typeof raw === 'object' && raw !== null && 'id' in raw && typeof raw.id === 'string' ? raw.id : '';
  return { reading: null, outcome: { id, state: 'refused', reason: parsed.error.issues.map((issue) => `${issue.path.join('.') || 'reading'}: ${issue.message}`).join('; ') } };
}

function refusalOf(reading: NewReading, context: BatchContext): string | null {
  if (!context.blocks.has(reading.blockId)) return 'This block is not in this estate.';
  const measure = context.measures.get(reading.measureCode);
  if (!measure) return `There is no measure "${reading.measureCode}" in this estate.`;
  if (reading.unit !== measure.unit) return `"${reading.measureCode}" is kept in ${measure.unit}; convert ${reading.unit} before sending.`;
  if (reading.rowId !== null) {
    const row = context.rows.get(reading.rowId);
    if (!row || row.blockId !== reading.blockId) return 'This row is not a row of the block.';
  }
  if (reading.roundId !== null && !context.rounds.has(reading.roundId)) return 'This round is not one of yours in this estate.';
  if (context.ownRoundsOnly && reading.roundId === null) return 'Crew record within a round that was sent to them.';
  if (reading.bagId !== null && !context.bags.has(reading.bagId)) return 'This bag is not in this estate.';
  if (reading.supersedes !== null && !context.known.has(reading.supersedes)) return 'The reading that this one corrects is not known here.';
  if (context.seasonOn(reading.takenAt) === null) return `No season of this estate holds ${reading.takenAt.slice(0, 10)}. Check the clock, or make the season first.`;
  return null;
}

function repeatOutcome(reading: NewReading, stored: Reading): ReadingOutcome {
  const same = stored.value === reading.value && stored.measureCode === reading.measureCode && stored.rowId === reading.rowId && stored.ordinal === reading.ordinal;
  return same ? { id: reading.id, state: 'received', reason: null } : { id: reading.id, state: 'refused', reason: 'A reading with this id is stored with another value. The first stays; send a correction under an id of its own.' };
}

async function insertReadings(trx: Transaction, access: Access, readings: NewReading[], context: BatchContext, now: Date): Promise<void> {
  if (readings.length === 0) return;
  await Reading.query(trx).insert(
    readings.map((reading) => {
      const skewed = reading.deviceTime !== null && Math.abs(Date.parse(reading.deviceTime) - now.getTime()) > clockToleranceMs;
      return {
        ...reading,
        estateId: access.estateId,
        seasonId: context.seasonOn(reading.takenAt)!,
        personId: access.personId,
        takenAt: new Date(reading.takenAt),
        deviceTime: reading.deviceTime === null ? null : new Date(reading.deviceTime),
        flags: skewed ? [...reading.flags, 'clock'] : reading.flags,
        state: reading.source === 'lab' ? ('provisional' as const) : ('checked' as const),
        receivedAt: now,
      };
    }),
  );
  await trx.raw(
    `update readings r set position = t.position from targets t
     where t.estate_id = r.estate_id and t.id = r.target_id and r.estate_id = ? and r.id = any(?)`,
    [access.estateId, readings.map((reading) => reading.id)],
  );
}

async function storeFindings(trx: Transaction, access: Access, findings: VineFinding[], context: BatchContext): Promise<ReadingOutcome[]> {
  const proposed = reachOf(access.roles, 'census.edit') !== 'do';
  const outcomes: ReadingOutcome[] = [];
  for (const finding of findings) {
    const row = context.rows.get(finding.rowId);
    if (!row || row.blockId !== finding.blockId) {
      outcomes.push({ id: finding.id, state: 'refused', reason: 'This row is not a row of the block.' });
      continue;
    }
    const { rowId, ordinal, state } = finding;
    await writeVines(trx, { estateId: access.estateId, blockId: finding.blockId }, [{ rowId, ordinal, state, proposed, notedBy: access.personId, notedAt: new Date(finding.notedAt) }]);
    outcomes.push({ id: finding.id, state: 'received', reason: null });
  }
  return outcomes;
}
