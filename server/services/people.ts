import type { z } from 'zod';
import { may } from '../../shared/catalog/permissions.ts';
import type { Role } from '../../shared/catalog/roles.ts';
import type { InvitationView, NewInvitation, PersonView, invitationAnswer, rolesChange } from '../../shared/contracts/people.ts';
import type { personChange } from '../../shared/contracts/session.ts';
import type { Access } from '../access/access.ts';
import { hashPassword, hashToken, newToken, passwordMatches } from '../access/passwords.ts';
import { Clash, Missing, NotAllowed, Unusable } from '../errors.ts';
import { queueMail } from '../mail/outbox.ts';
import { writeAudit } from '../models/AuditEntry.ts';
import { Estate } from '../models/Estate.ts';
import { Invitation } from '../models/Invitation.ts';
import { Membership } from '../models/Membership.ts';
import { Person } from '../models/Person.ts';

const invitationDays = 14;

export async function listPeople(access: Access): Promise<PersonView[]> {
  const memberships = await Membership.query().where({ estateId: access.estateId }).orderBy('createdAt');
  const people = await Person.query().findByIds([...new Set(memberships.map((membership) => membership.personId))]).orderBy('name');
  return people.map((person) => {
    const open = memberships.filter((membership) => membership.personId === person.id && membership.endedAt === null);
    return {
      id: person.id,
      name: person.name,
      email: person.email,
      memberships: open.map(({ id, role, startsOn, endsOn }) => ({ id, role, startsOn, endsOn })),
      ended: open.length === 0,
    };
  });
}

export async function listInvitations(access: Access, now: Date): Promise<InvitationView[]> {
  const rows = await Invitation.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(200);
  const inviters = await Person.query().findByIds([...new Set(rows.map((row) => row.invitedBy))]);
  return rows.map((row) => ({
    id: row.id,
    email: row.email,
    name: row.name,
    role: row.role,
    expiresAt: row.expiresAt.toISOString(),
    state: row.acceptedAt ? 'accepted' : row.revokedAt ? 'revoked' : row.expiresAt < now ? 'expired' : 'open',
    invitedBy: inviters.find((person) => person.id === row.invitedBy)?.name ?? '',
  }));
}

/** Invites by mail with a single-use link. A manager may invite crew only; nobody but the owner makes an owner. */
export async function invite(access: Access, input: NewInvitation, options: { publicUrl: string; now: Date }): Promise<{ id: string }> {
  requireRoleGrant(access, input.role);
  return Invitation.transaction(async (trx) => {
    const estate = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
    const inviter = await Person.query(trx).findById(access.personId).throwIfNotFound();
    const { token, tokenHash } = newToken();
    const expiresAt = new Date(options.now.getTime() + invitationDays * 86_400_000);
    const invitation = await Invitation.query(trx).insert({ ...input, estateId: access.estateId, tokenHash, expiresAt, invitedBy: access.personId });
    await queueMail(trx, {
      estateId: access.estateId,
      kind: 'invitation',
      to: { address: input.email, name: input.name, language: input.language },
      facts: { estate: estate.name, inviter: inviter.name, role: input.role, days: invitationDays, link: `${options.publicUrl}/join/${token}` },
    });
    await writeAudit(trx, access, { action: 'people.invite', subjectType: 'invitation', subjectId: invitation.id, subjectName: input.email, after: { role: input.role, accessEndsOn: input.accessEndsOn } });
    return { id: invitation.id };
  });
}

export async function revokeInvitation(access: Access, invitationId: string, now: Date): Promise<void> {
  await Invitation.transaction(async (trx) => {
    const invitation = await Invitation.query(trx).findOne({ estateId: access.estateId, id: invitationId }).throwIfNotFound();
    requireRoleGrant(access, invitation.role);
    if (invitation.acceptedAt) throw new Clash('accepted', 'This invitation has been accepted already. End the access of the person instead.');
    await invitation.$query(trx).patch({ revokedAt: now });
    await writeAudit(trx, access, { action: 'people.revokeInvitation', subjectType: 'invitation', subjectId: invitationId, subjectName: invitation.email });
  });
}

export async function readInvitation(token: string, now: Date): Promise<{ estate: string; email: string; name: string; role: Role; knownPerson: boolean }> {
  const invitation = await openInvitation(token, now);
  const estate = await Estate.query().findById(invitation.estateId).throwIfNotFound();
  const person = await Person.query().findOne({ email: invitation.email });
  return { estate: estate.name, email: invitation.email, name: invitation.name, role: invitation.role, knownPerson: person !== undefined };
}

/** Accepts an invitation once: makes the person, or checks the password of a known one, and opens the membership. */
export async function acceptInvitation(answer: z.infer<typeof invitationAnswer>, now: Date): Promise<{ personId: string }> {
  const offer = await openInvitation(answer.token, now);
  return Invitation.transaction(async (trx) => {
    const invitation = await Invitation.query(trx).findById(offer.id).forUpdate().throwIfNotFound();
    if (invitation.acceptedAt) throw new Clash('usedInvitation', 'This invitation has been used already. Sign in, or ask for a new one.');
    const known = await Person.query(trx).findOne({ email: invitation.email });
    if (known && !(await passwordMatches(known.passwordHash, answer.password))) {
      throw new Unusable('wrongPassword', 'This address has an account already. Give its password to join with it.');
    }
    const person = known ?? (await Person.query(trx).insert({ name: answer.name, email: invitation.email, passwordHash: await hashPassword(answer.password), language: answer.language }));
    await Membership.query(trx)
      .insert({ estateId: invitation.estateId, personId: person.id, role: invitation.role, endsOn: invitation.accessEndsOn })
      .onConflict()
      .ignore();
    await invitation.$query(trx).patch({ acceptedAt: now });
    await writeAudit(trx, { estateId: invitation.estateId, personId: person.id }, { action: 'people.join', subjectType: 'person', subjectId: person.id, subjectName: person.name, after: { role: invitation.role } });
    return { personId: person.id };
  });
}

/** Sets the roles of a person; an empty set ends the access. The estate keeps at least one owner. */
export async function changeRoles(access: Access, personId: string, change: z.infer<typeof rolesChange>, now: Date): Promise<void> {
  await Membership.transaction(async (trx) => {
    const open = await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').forUpdate();
    const ever = open.length > 0 || (await Membership.query(trx).findOne({ estateId: access.estateId, personId })) !== undefined;
    if (!ever) throw new Missing();
    const wanted = new Set(change.roles);
    const held = new Set(open.map((membership) => membership.role));
    for (const role of symmetricDifference(wanted, held)) requireRoleGrant(access, role);
    if (held.has('owner') && !wanted.has('owner')) await keepAnOwner(access.estateId, personId, trx);
    await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').whereNotIn('role', change.roles).patch({ endedAt: now });
    await Membership.query(trx).where({ estateId: access.estateId, personId }).whereNull('endedAt').patch({ endsOn: change.endsOn });
    const added = change.roles.filter((role) => !held.has(role));
    if (added.length > 0) await Membership.query(trx).insert(added.map((role) => ({ estateId: access.estateId, personId, role, endsOn: change.endsOn })));
    const person = await Person.query(trx).findById(personId).throwIfNotFound();
    await writeAudit(trx, access, { action: change.roles.length === 0 ? 'people.endAccess' : 'people.changeRoles', subjectType: 'person', subjectId: personId, subjectName: person.name, before: { roles: [...held] }, after: { roles: change.roles, endsOn: change.endsOn }, reason: change.reason || null });
  });
}

/** A person's own name, language, units, theme and password. */
export async function changeSelf(personId: string, change: z.infer<typeof personChange>): Promise<void> {
  const { password, currentPassword, ...facts } = change;
  const person = await Person.query().findById(personId).throwIfNotFound();
  if (password !== undefined && !(await passwordMatches(person.passwordHash, currentPassword ?? ''))) {
    throw new Unusable('wrongPassword', 'The current password is not right. The new one was not set.');
  }
  await person.$query().patch({ ...facts, ...(password !== undefined ? { passwordHash: await hashPassword(password) } : {}) });
}

function requireRoleGrant(access: Access, role: Role): void {
  if (role === 'owner' && !access.roles.includes('owner')) throw new NotAllowed('Only an owner can make or end an owner.');
  if (may(access.roles, 'people.manage')) return;
  if (may(access.roles, 'people.manage', 'propose') && role === 'crew') return;
  throw new NotAllowed('You may invite and end crew only. Ask the owner for other roles.');
}

async function openInvitation(token: string, now: Date): Promise<Invitation> {
  const invitation = await Invitation.query().findOne({ tokenHash: hashToken(token) });
  if (!invitation) throw new Missing('This invitation link is not known. Ask for a new invitation.');
  if (invitation.acceptedAt) throw new Clash('usedInvitation', 'This invitation has been used already. Sign in, or ask for a new one.');
  if (invitation.revokedAt) throw new Clash('revokedInvitation', 'This invitation was taken back. Ask the person who invited you.');
  if (invitation.expiresAt < now) throw new Clash('expiredInvitation', 'This invitation has expired. Ask for a new one.');
  return invitation;
}

async function keepAnOwner(estateId: string, personId: string, trx: Parameters<typeof Membership.query>[0]): Promise<void> {
  const others = await Membership.query(trx).where({ estateId, role: 'owner' }).whereNull('endedAt').whereNot({ personId }).resultSize();
  if (others === 0) throw new Clash('lastOwner', 'An estate needs at least one owner. Make somebody else owner first.');
}

function symmetricDifference(a: ReadonlySet<Role>, b: ReadonlySet<Role>): Role[] {
  return [...[...a].filter((role) => !b.has(role)), ...[...b].filter((role) => !a.has(role))];
}
