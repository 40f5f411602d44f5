import type { TransactionOrKnex } from 'objection';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';

/**
 * People whose only open role, here and in every other estate, is crew of this estate. A PIN is short: it must never open
 * what a manager or an owner may do.
 */
export async function crewOnlyPeople(estateId: string, trx?: TransactionOrKnex): Promise<Person[]> {
  const inForce = () => Membership.query(trx).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)');
  const others = inForce().where((where) => void where.whereNot({ estateId }).orWhereNot({ role: 'crew' })).select('personId');
  return Person.query(trx).whereIn('id', inForce().where({ estateId, role: 'crew' }).select('personId')).whereNotIn('id', others).orderBy('name').select('id', 'name');
}
