import type { Transaction } from 'objection';
import type { NewReading } from '../../../shared/contracts/readings.ts';
import type { Access } from '../../access/access.ts';
import { Reading } from '../../models/Reading.ts';

/**
 * A sheet may be typed although its phone had sent part of the walk, or be typed and the phone be found later. The same
 * person, round, target, vine, measure and value on paper and from the phone is one reading: a line of paper that the phone
 * had sent is not stored again (its id is returned); a line of paper that a found phone repeats stays on record and is left
 * out, since the phone has the true time.
 */
export async function matchPaperAndPhone(trx: Transaction, access: Access, fresh: readonly NewReading[]): Promise<Set<string>> {
  const candidates = fresh.filter(({ targetId, roundId, supersedes, source }) => targetId !== null && roundId !== null && (source === 'field' || (source === 'paper' && supersedes === null)));
  const known = new Set<string>();
  if (candidates.length === 0) return known;
  const stored = await Reading.query(trx)
    .where({ estateId: access.estateId })
    .whereIn('roundId', [...new Set(candidates.map(({ roundId }) => roundId!))])
    .whereIn('targetId', [...new Set(candidates.map(({ targetId }) => targetId!))])
    .whereNull('excludedReason')
    .whereNotExists(Reading.query(trx).alias('later').whereColumn('later.supersedes', 'readings.id').whereColumn('later.estateId', 'readings.estateId'));
  const repeated: string[] = [];
  for (const reading of candidates) {
    const twin = stored.find((one) => isTwin(reading, one, access));
    if (!twin) continue;
    if (reading.source === 'paper') known.add(reading.id);
    else repeated.push(twin.id);
  }
  await Reading.query(trx).where({ estateId: access.estateId }).whereIn('id', repeated).patch({ excludedReason: 'The phone sent the same value later.' });
  return known;
}

function isTwin(reading: NewReading, stored: Reading, access: Access): boolean {
  return (
    stored.source === (reading.source === 'paper' ? 'field' : 'paper') && stored.personId === (reading.readBy ?? access.personId) &&
    stored.roundId === reading.roundId && stored.targetId === reading.targetId && stored.rowId === reading.rowId && stored.ordinal === reading.ordinal &&
    stored.measureCode === reading.measureCode && stored.value === reading.value
  );
}
