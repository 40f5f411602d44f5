import { raw } from 'objection';
import type { RestrictionInForce } from '../../../shared/contracts/blocks.ts';
import { estateDay } from '../../ground/estateDay.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';

interface InForce {
  restriction: RestrictionInForce | null;
  noPickBefore: string | null;
}

/** Entry restrictions in force now, the one that ends last for each block, and the latest day before which nothing may be picked. */
export async function restrictionsInForce(estateId: string, blockIds: string[], now: Date): Promise<(blockId: string) => InForce> {
  const today = await estateDay(estateId, now);
  const rows = (await EntryRestriction.query()
    .alias('e')
    .join('people as p', 'p.id', 'e.setBy')
    .where('e.estateId', estateId)
    .whereIn('e.blockId', blockIds)
    .where((query) => query.where((open) => open.whereNull('e.liftedAt').where('e.startsAt', '<=', now).where('e.endsAt', '>', now)).orWhere('e.noPickBefore', '>', today))
    .orderBy('e.endsAt', 'desc')
    .select('e.*', 'p.name as setByName', raw('(e.lifted_at is null and e.starts_at <= ? and e.ends_at > ?)', [now, now]).as('closed'))) as (EntryRestriction & { setByName: string; closed: boolean })[];
  return (blockId) => {
    const here = rows.filter((row) => row.blockId === blockId);
    const longest = here.find((row) => row.closed);
    const picks = here.map((row) => row.noPickBefore).filter((day): day is string => day !== null).sort();
    return {
      restriction: longest
        ? { id: longest.id, startsAt: longest.startsAt.toISOString(), endsAt: longest.endsAt.toISOString(), product: longest.product, setBy: longest.setByName, rowIds: longest.rowIds }
        : null,
      noPickBefore: picks.at(-1) ?? null,
    };
  };
}
