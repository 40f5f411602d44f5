import type { TransactionOrKnex } from 'objection';
import { Reading } from '../../models/Reading.ts';

/**
 * What stands for each of these readings today: its last correction, or the reading itself. A reading that two people
 * corrected has both. Conflicts name the readings as they came; whoever settles one judges what counts now.
 */
export async function newestReadings(estateId: string, ids: readonly string[], trx?: TransactionOrKnex): Promise<Map<string, Reading[]>> {
  if (ids.length === 0) return new Map();
  const { rows } = (await (trx ?? Reading.knex()).raw(
    `with recursive chain as (
       select id as first_id, id from readings where estate_id = :estateId and id = any(:ids)
       union select c.first_id, r.id from chain c join readings r on r.estate_id = :estateId and r.supersedes = c.id
     )
     select c.first_id, c.id from chain c where not exists (select 1 from readings r where r.estate_id = :estateId and r.supersedes = c.id)`,
    { estateId, ids: [...ids] },
  )) as { rows: { first_id: string; id: string }[] };
  const newest = await Reading.query(trx).where({ estateId }).whereIn('id', [...new Set(rows.map(({ id }) => id))]);
  const byId = new Map(newest.map((reading) => [reading.id, reading]));
  const found = new Map<string, Reading[]>();
  for (const { first_id: first, id } of rows) found.set(first, [...(found.get(first) ?? []), byId.get(id)!]);
  return found;
}

/** The readings of several chains, each once, the earliest taken first. */
export function inOrderOfTaking(chains: Iterable<readonly Reading[]>): Reading[] {
  return [...new Map([...chains].flat().map((reading) => [reading.id, reading])).values()].sort((a, b) => a.takenAt.getTime() - b.takenAt.getTime() || a.receivedAt.getTime() - b.receivedAt.getTime() || a.id.localeCompare(b.id));
}
