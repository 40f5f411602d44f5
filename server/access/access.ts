import { reachOf, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import type { Role } from '../../shared/catalog/roles.ts';
import { NotAllowed } from '../errors.ts';

/** Who is acting, where, in which roles. Every service gets it; every query uses its estateId. */
export interface Access {
  estateId: string;
  personId: string;
  roles: Role[];
}

const strength: Record<Reach, number> = { read: 1, own: 2, propose: 3, do: 4 };

/** Refuses unless the person's roles reach at least so far. Returns the reach they have. */
export function requireReach(access: Access, action: Permission, atLeast: Reach = 'do'): Reach {
  const reach = reachOf(access.roles, action);
  if (reach === null || strength[reach] < strength[atLeast]) throw new NotAllowed();
  return reach;
}
