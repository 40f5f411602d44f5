import type { TransactionOrKnex } from 'objection';
import type { z } from 'zod';
import type { Role } from '../../../shared/catalog/roles.ts';
import type { PersonView, rolesChange } from '../../../shared/contracts/people.ts';
import type { personChange } from '../../../shared/contracts/session.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';
import { endSessions } from '../../models/SessionRecord.ts';
import { requireRoleGrant } from './roleGrants.ts';
import { say } from '../../sentences/say.ts';

/** Everybody who ever had access, with the roles that are open; a role past its last day is over. */
export async function listPeople(access: Access, today: string): Promise<PersonView[]> {
  const memberships = await Membership.query().where({ estateId: access.estateId }).orderBy('createdAt');
  const people = await Person.query().findByIds([...new Set(memberships.map((membership) => membership.personId))]).orderBy('name');
  return people.map((person) => {
    const open = memberships.filter((membership) => membership.personId === person.id && membership.endedAt === null);
    return {
      id: person.id,
      name: person.name,
      email: person.email,
      memberships: open.map(({ id, role, startsOn, endsOn }) => ({ id, role, startsOn, endsOn })),
      ended: open.every(({ endsOn }) => endsOn !== null && endsOn < today),
    };
  });
}

/** Sets the roles of a person; an empty set ends the access. The estate keeps at least one owner. */
export async function changeRoles(access: Access, personId: string, change: z.infer<typeof rolesChange>, now: Date): Promise<void> {
  await Membership.transaction(async (trx) => {
    // Two owners who end each other at once must not both succeed.
    await Estate.query(trx).findById(access.estateId).forUpdate();
    const open = await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').forUpdate();
    const ever = open.length > 0 || (await Membership.query(trx).findOne({ estateId: access.estateId, personId })) !== undefined;
    if (!ever) throw new Missing();
    const wanted = new Set(change.roles);
    const held = new Set(open.map((membership) => membership.role));
    for (const role of symmetricDifference(wanted, held)) requireRoleGrant(access, role);
    if (held.has('owner') && (!wanted.has('owner') || change.endsOn !== null)) await keepAnOwner(access.estateId, personId, trx);
    await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').whereNotIn('role', change.roles).patch({ endedAt: now });
    await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').patch({ endsOn: change.endsOn });
    const added = change.roles.filter((role) => !held.has(role));
    if (added.length > 0) await Membership.query(trx).insert(added.map((role) => ({ estateId: access.estateId, personId, role, endsOn: change.endsOn })));
    if (change.roles.length === 0) await endSessionsOfLeaver(personId, trx);
    const person = await Person.query(trx).findById(personId).throwIfNotFound();
    await writeAudit(trx, access, {
      action: change.roles.length === 0 ? 'people.endAccess' : 'people.changeRoles',
      subjectType: 'person',
      subjectId: personId,
      subjectName: person.name,
      before: { roles: [...held] },
      after: { roles: change.roles, endsOn: change.endsOn },
      reason: change.reason || null,
    });
  });
}

/** A person's own name, language, units and theme. */
export async function changeSelf(personId: string, change: z.infer<typeof personChange>): Promise<void> {
  if (Object.keys(change).length > 0) await Person.query().findById(personId).patch(change);
}

/** Whoever works in no estate any more is signed out at once; the estate itself is shut by its guard in any case. */
async function endSessionsOfLeaver(personId: string, trx: TransactionOrKnex): Promise<void> {
  const elsewhere = await Membership.query(trx).where({ personId }).whereNull('endedAt').resultSize();
  if (elsewhere === 0) await endSessions(trx, personId);
}

async function keepAnOwner(estateId: string, personId: string, trx: TransactionOrKnex): Promise<void> {
  const others = await Membership.query(trx).where({ estateId, role: 'owner' }).whereNull('endedAt').whereNull('endsOn').whereNot({ personId }).resultSize();
  if (others === 0) throw new Clash('lastOwner', say('lastOwner'));
}

function symmetricDifference(a: ReadonlySet<Role>, b: ReadonlySet<Role>): Role[] {
  return [...[...a].filter((role) => !b.has(role)), ...[...b].filter((role) => !a.has(role))];
}
