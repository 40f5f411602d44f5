import type { TransactionOrKnex } from 'objection';
import { may, type Permission } from '../../shared/catalog/permissions.ts';
import { Membership } from '../models/Membership.ts';
import { Person } from '../models/Person.ts';

/** People with access today whose roles let them do this, by name. */
export async function peopleWhoMay(trx: TransactionOrKnex | undefined, estateId: string, action: Permission): Promise<Person[]> {
  const memberships = await Membership.query(trx).where({ estateId }).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)').select('personId', 'role');
  const ids = memberships.filter(({ role }) => may([role], action, 'do')).map(({ personId }) => personId);
  return Person.query(trx).findByIds([...new Set(ids)]).orderBy('name');
}
