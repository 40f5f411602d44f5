import type { TransactionOrKnex } from 'objection';
import type { z } from 'zod';
import type { Role } from '../../../shared/catalog/roles.ts';
import type { InvitationView, NewInvitation, invitationAnswer } from '../../../shared/contracts/people.ts';
import type { Access } from '../../access/access.ts';
import { hashPassword, hashToken, newToken, passwordMatches } from '../../access/passwords.ts';
import { Clash, Missing, Unusable } from '../../errors.ts';
import { queueMail } from '../../mail/outbox.ts';
import { rolePhrase } from '../../mail/roleWords.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Invitation } from '../../models/Invitation.ts';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';
import { requireRoleGrant } from './roleGrants.ts';
import { say } from '../../sentences/say.ts';

const invitationDays = 14;
const dueAfter = (now: Date) => new Date(now.getTime() + invitationDays * 86_400_000);

export async function listInvitations(access: Access, now: Date): Promise<InvitationView[]> {
  const rows = await Invitation.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(200);
  const inviters = await Person.query().findByIds([...new Set(rows.map((row) => row.invitedBy))]);
  return rows.map((row) => ({
    id: row.id,
    email: row.email,
    name: row.name,
    roles: row.roles,
    accessEndsOn: row.accessEndsOn,
    expiresAt: row.expiresAt.toISOString(),
    state: row.acceptedAt ? 'accepted' : row.revokedAt ? 'revoked' : row.expiresAt < now ? 'expired' : 'open',
    invitedBy: inviters.find((person) => person.id === row.invitedBy)?.name ?? '',
  }));
}

/** Invites by mail with a single-use link. A manager may invite crew only; nobody but the owner makes an owner. */
export async function invite(access: Access, input: NewInvitation, options: { publicUrl: string; now: Date }): Promise<{ id: string }> {
  for (const role of input.roles) requireRoleGrant(access, role);
  return Invitation.transaction(async (trx) => {
    const { token, tokenHash } = newToken();
    const invitation = await Invitation.query(trx).insert({ ...input, estateId: access.estateId, tokenHash, expiresAt: dueAfter(options.now), invitedBy: access.personId });
    await mailInvitation(trx, access, { invitation: input, link: `${options.publicUrl}/join/${token}` });
    await writeAudit(trx, access, { action: 'people.invite', subjectType: 'invitation', subjectId: invitation.id, subjectName: input.email, after: { roles: input.roles, accessEndsOn: input.accessEndsOn } });
    return { id: invitation.id };
  });
}

/** Sends an invitation once more with a new link and a new term; the link sent before is worth nothing from then on. */
export async function resendInvitation(access: Access, invitationId: string, options: { publicUrl: string; now: Date }): Promise<void> {
  await Invitation.transaction(async (trx) => {
    const invitation = await Invitation.query(trx).findOne({ estateId: access.estateId, id: invitationId }).forUpdate().throwIfNotFound();
    for (const role of invitation.roles) requireRoleGrant(access, role);
    if (invitation.acceptedAt) throw new Clash('accepted', say('invitationAcceptedSignIn'));
    if (invitation.revokedAt) throw new Clash('revokedInvitation', say('invitationTakenBackAnew'));
    const { token, tokenHash } = newToken();
    await invitation.$query(trx).patch({ tokenHash, expiresAt: dueAfter(options.now) });
    await mailInvitation(trx, access, { invitation, link: `${options.publicUrl}/join/${token}` });
    await writeAudit(trx, access, { action: 'people.resendInvitation', subjectType: 'invitation', subjectId: invitationId, subjectName: invitation.email });
  });
}

export async function revokeInvitation(access: Access, invitationId: string, now: Date): Promise<void> {
  await Invitation.transaction(async (trx) => {
    const invitation = await Invitation.query(trx).findOne({ estateId: access.estateId, id: invitationId }).throwIfNotFound();
    for (const role of invitation.roles) requireRoleGrant(access, role);
    if (invitation.acceptedAt) throw new Clash('accepted', say('invitationAcceptedEnd'));
    await invitation.$query(trx).patch({ revokedAt: now });
    await writeAudit(trx, access, { action: 'people.revokeInvitation', subjectType: 'invitation', subjectId: invitationId, subjectName: invitation.email });
  });
}

export async function readInvitation(token: string, now: Date): Promise<{ estate: string; email: string; name: string; roles: Role[]; knownPerson: boolean }> {
  const invitation = await openInvitation(token, now);
  const estate = await Estate.query().findById(invitation.estateId).throwIfNotFound();
  const person = await Person.query().findOne({ email: invitation.email });
  return { estate: estate.name, email: invitation.email, name: invitation.name, roles: invitation.roles, knownPerson: person !== undefined };
}

/** Accepts an invitation once: makes the person, or checks the password of a known one, and opens the membership. */
export async function acceptInvitation(answer: z.infer<typeof invitationAnswer>, now: Date): Promise<{ personId: string }> {
  const offer = await openInvitation(answer.token, now);
  return Invitation.transaction(async (trx) => {
    const invitation = await Invitation.query(trx).findById(offer.id).forUpdate().throwIfNotFound();
    if (invitation.acceptedAt) throw new Clash('usedInvitation', say('invitationUsed'));
    const known = await Person.query(trx).findOne({ email: invitation.email });
    if (known && !(await passwordMatches(known.passwordHash, answer.password))) {
      throw new Unusable('wrongPassword', say('addressHasAccount'));
    }
    const person = known ?? (await Person.query(trx).insert({ name: answer.name, email: invitation.email, passwordHash: await hashPassword(answer.password), language: answer.language }));
    await Membership.query(trx)
      .insert(invitation.roles.map((role) => ({ estateId: invitation.estateId, personId: person.id, role, endsOn: invitation.accessEndsOn })))
      .onConflict()
      .ignore();
    await invitation.$query(trx).patch({ acceptedAt: now });
    await writeAudit(trx, { estateId: invitation.estateId, personId: person.id }, { action: 'people.join', subjectType: 'person', subjectId: person.id, subjectName: person.name, after: { roles: invitation.roles } });
    return { personId: person.id };
  });
}

async function openInvitation(token: string, now: Date): Promise<Invitation> {
  const invitation = await Invitation.query().findOne({ tokenHash: hashToken(token) });
  if (!invitation) throw new Missing(say('unknownInvitation'));
  if (invitation.acceptedAt) throw new Clash('usedInvitation', say('invitationUsed'));
  if (invitation.revokedAt) throw new Clash('revokedInvitation', say('invitationTakenBack'));
  if (invitation.expiresAt < now) throw new Clash('expiredInvitation', say('invitationExpired'));
  return invitation;
}

async function mailInvitation(trx: TransactionOrKnex, access: Access, { invitation, link }: { invitation: Pick<Invitation, 'email' | 'name' | 'language' | 'roles'>; link: string }): Promise<void> {
  const [estate, inviter] = await Promise.all([Estate.query(trx).findById(access.estateId).throwIfNotFound(), Person.query(trx).findById(access.personId).throwIfNotFound()]);
  await queueMail(trx, {
    estateId: access.estateId,
    kind: 'invitation',
    to: { address: invitation.email, name: invitation.name, language: invitation.language },
    facts: { estate: estate.name, inviter: inviter.name, role: rolePhrase(invitation.roles, invitation.language), days: invitationDays, link },
  });
}
