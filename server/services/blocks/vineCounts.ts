import type { TransactionOrKnex } from 'objection';
import type { Census, VineCounts } from '../../../shared/contracts/rows.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { Vine } from '../../models/Vine.ts';

interface Totals {
  rows: number;
  counts: Omit<VineCounts, 'census'>;
}

const none = { places: 0, living: 0, missing: 0, dead: 0, replant: 0, offType: 0, sick: 0, proposed: 0 };

/** Rows and vines of many blocks at once: places from the rows, states from what was marked. A proposed mark counts only as proposed. */
export async function vineTotals(estateId: string, blockIds: string[], trx?: TransactionOrKnex): Promise<(blockId: string, census: Census) => { rows: number; vines: VineCounts }> {
  const rows = (await BlockRow.query(trx).where({ estateId }).whereIn('blockId', blockIds).whereNull('retiredAt').groupBy('blockId').select('blockId').count('id as rows').sum('vineCount as places')) as unknown as {
    blockId: string;
    rows: number;
    places: number;
  }[];
  const marks = (await Vine.query(trx)
    .alias('v')
    .joinRaw('join block_rows r on r.estate_id = v.estate_id and r.id = v.row_id and r.retired_at is null')
    .where('v.estateId', estateId)
    .whereIn('v.blockId', blockIds)
    .groupBy('v.blockId', 'v.state', 'v.proposed')
    .select('v.blockId', 'v.state', 'v.proposed')
    .count('v.id as count')) as unknown as { blockId: string; state: Vine['state']; proposed: boolean; count: number }[];
  const totals = new Map<string, Totals>(rows.map((row) => [row.blockId, { rows: Number(row.rows), counts: { ...none, places: Number(row.places), living: Number(row.places) } }]));
  for (const mark of marks) {
    const counts = totals.get(mark.blockId)?.counts;
    if (!counts) continue;
    const count = Number(mark.count);
    if (mark.proposed) {
      counts.proposed += count;
      continue;
    }
    counts[mark.state] += count;
    if (mark.state === 'missing' || mark.state === 'dead') counts.living -= count;
  }
  return (blockId, census) => {
    const found = totals.get(blockId);
    return { rows: found?.rows ?? 0, vines: { ...(found?.counts ?? none), census } };
  };
}
