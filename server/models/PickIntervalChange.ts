import type { TransactionOrKnex } from 'objection';
import type { PickIntervalBasis } from '../../shared/contracts/restrictions.ts';
import { EstateModel } from './BaseModel.ts';

/** A change of the day before which nothing may be picked, with its ground, person and reason. */
export class PickIntervalChange extends EstateModel {
  static override tableName = 'pick_interval_changes';

  declare restrictionId: string;
  declare basis: PickIntervalBasis | 'withEntry';
  declare dayBefore: string | null;
  declare dayAfter: string | null;
  declare reason: string;
  declare changedBy: string;
  declare changedAt: Date;
}

/** Day of each restriction as it stood at a moment, where it was changed after: what the first later change found. */
export async function pickDaysAt(estateId: string, restrictionIds: readonly string[], { at, trx }: { at: Date; trx?: TransactionOrKnex | undefined }): Promise<Map<string, string | null>> {
  const later = await PickIntervalChange.query(trx).where({ estateId }).whereIn('restrictionId', [...restrictionIds]).where('changedAt', '>', at).orderBy('changedAt', 'desc');
  return new Map(later.map(({ restrictionId, dayBefore }) => [restrictionId, dayBefore]));
}
