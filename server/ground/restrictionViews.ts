import type { RestrictionView } from '../../shared/contracts/restrictions.ts';
import { Block } from '../models/Block.ts';
import type { EntryRestriction } from '../models/EntryRestriction.ts';
import { Person } from '../models/Person.ts';
import { PickIntervalChange } from '../models/PickIntervalChange.ts';

/** Restrictions as they are shown, with names; those in force now are marked. */
export async function restrictionViews(estateId: string, rows: EntryRestriction[], now: Date): Promise<RestrictionView[]> {
  const changes = await PickIntervalChange.query().where({ estateId }).whereIn('restrictionId', rows.map(({ id }) => id)).orderBy('changedAt');
  const [blocks, people] = await Promise.all([
    Block.query().findByIds([...new Set(rows.map((row) => row.blockId))]).where({ estateId }).select('id', 'name'),
    Person.query().findByIds([...new Set([...rows.flatMap((row) => [row.setBy, row.liftedBy ?? row.setBy]), ...changes.map(({ changedBy }) => changedBy)])]).select('id', 'name'),
  ]);
  const nameOf = (list: { id: string; name: string }[], id: string | null) => list.find((item) => item.id === id)?.name ?? '';
  return rows.map((row) => ({
    id: row.id,
    blockId: row.blockId,
    blockName: nameOf(blocks, row.blockId),
    rowIds: row.rowIds,
    startsAt: row.startsAt.toISOString(),
    endsAt: row.endsAt.toISOString(),
    product: row.product,
    labelInterval: row.labelInterval,
    noPickBefore: row.noPickBefore,
    note: row.note,
    setBy: nameOf(people, row.setBy),
    lifted: row.liftedAt ? { at: row.liftedAt.toISOString(), by: nameOf(people, row.liftedBy), reason: row.liftedReason ?? '' } : null,
    pickChanges: changes
      .filter(({ restrictionId }) => restrictionId === row.id)
      .map(({ changedAt, changedBy, reason, basis, dayBefore, dayAfter }) => ({
        at: changedAt.toISOString(),
        by: nameOf(people, changedBy),
        reason,
        basis,
        before: dayBefore,
        after: dayAfter,
      })),
    inForce: row.liftedAt === null && row.startsAt <= now && row.endsAt > now,
  }));
}
