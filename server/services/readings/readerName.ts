import { may } from '../../../shared/catalog/permissions.ts';
import type { Access } from '../../access/access.ts';

/** Name of who recorded, as far as the role may see it: in full, as initials, or not at all. */
export function nameFor(access: Access, people: readonly { id: string; name: string }[], personId: string | null): string | null {
  const name = people.find((person) => person.id === personId)?.name ?? null;
  if (name === null || personId === access.personId || may(access.roles, 'names.see')) return name;
  return may(access.roles, 'names.see', 'read') ? name.split(/\s+/).map((word) => `${word.charAt(0)}.`).join(' ') : null;
}
