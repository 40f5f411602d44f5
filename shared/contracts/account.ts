import { z } from 'zod';
import { newPassword } from './common.ts';

export const passwordChange = z.object({ currentPassword: z.string().max(200), password: newPassword });
export type PasswordChange = z.infer<typeof passwordChange>;

/** Asking for a new password says the same to everybody: `email` only has to look like an address. */
export const resetRequest = z.object({ email: z.email('This is not an e-mail address.').trim().toLowerCase().max(200) });

export const resetAnswer = z.object({ token: z.string().min(20).max(200), password: newPassword });
export type ResetAnswer = z.infer<typeof resetAnswer>;

/** A place where the person is signed in. `key` names it without being of use to sign in. */
export const openSession = z.object({ key: z.string(), device: z.string(), signedInAt: z.string().nullable(), lastUsedAt: z.string(), isThis: z.boolean() });
export type OpenSession = z.infer<typeof openSession>;
