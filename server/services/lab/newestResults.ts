import type { TransactionOrKnex } from 'objection';
import { Reading } from '../../models/Reading.ts';

/** The lab's figures of these bags, in the order in which they came; a corrected one gives way to its correction. */
export async function newestResults(estateId: string, bagIds: readonly string[], trx?: TransactionOrKnex): Promise<Reading[]> {
  return Reading.query(trx)
    .where('readings.estateId', estateId)
    .where('readings.source', 'lab')
    .whereIn('readings.bagId', bagIds)
    .whereNotExists(Reading.query().alias('later').whereColumn('later.supersedes', 'readings.id').whereColumn('later.estateId', 'readings.estateId'))
    .orderBy('receivedAt')
    .orderBy('id');
}
