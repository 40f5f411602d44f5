import { may } from '../../../shared/catalog/permissions.ts';
import type { Role } from '../../../shared/catalog/roles.ts';
import type { Access } from '../../access/access.ts';
import { NotAllowed } from '../../errors.ts';
import { say } from '../../sentences/say.ts';

/** Refuses roles that the person may not give or take: a manager gives crew only; nobody but an owner makes an owner. */
export function requireRoleGrant(access: Access, role: Role): void {
  if (role === 'owner' && !access.roles.includes('owner')) throw new NotAllowed(say('ownersMakeOwners'));
  if (may(access.roles, 'people.manage')) return;
  if (may(access.roles, 'people.manage', 'propose') && role === 'crew') return;
  throw new NotAllowed(say('managersInviteCrew'));
}
