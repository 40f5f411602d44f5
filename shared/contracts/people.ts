import { z } from 'zod';
import { roles } from '../catalog/roles.ts';
import { id, isoDate, language, newPassword } from './common.ts';

export const role = z.enum(roles);

export const newInvitation = z.object({
  email: z.email('This is not an e-mail address.').trim().toLowerCase().max(200),
  name: z.string().trim().max(120).default(''),
  /** One or more; a person with several may do what any of them may. */
  roles: z.array(role).min(1, 'Choose at least one role.').max(roles.length).transform((chosen) => [...new Set(chosen)]),
  language: language.default('en'),
  accessEndsOn: isoDate.nullable().default(null),
});
export type NewInvitation = z.infer<typeof newInvitation>;

export const invitationView = z.object({ id, email: z.string(), name: z.string(), roles: z.array(role), accessEndsOn: isoDate.nullable(), expiresAt: z.string(), state: z.enum(['open', 'accepted', 'expired', 'revoked']), invitedBy: z.string() });
export type InvitationView = z.infer<typeof invitationView>;

/** What somebody with an invitation link sees before accepting. */
export const invitationOffer = z.object({ estate: z.string(), email: z.string(), name: z.string(), roles: z.array(role), knownPerson: z.boolean() });

export const invitationAnswer = z.object({ token: z.string().min(20).max(200), name: z.string().trim().min(1, 'Give your name.').max(120), password: newPassword, language: language.default('en') });

export const personView = z.object({
  id,
  name: z.string(),
  email: z.string().nullable(),
  memberships: z.array(z.object({ id, role, startsOn: isoDate, endsOn: isoDate.nullable() })),
  ended: z.boolean(),
});
export type PersonView = z.infer<typeof personView>;

/** Full new set of roles of a person; an empty set ends the access. */
export const rolesChange = z.object({ roles: z.array(role), endsOn: isoDate.nullable().default(null), reason: z.string().trim().max(400).default('') });
