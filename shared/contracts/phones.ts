import { z } from 'zod';
import { id, isoTime, language } from './common.ts';

/** How a phone stands, told at each contact. It says nothing of where the phone is. */
export const phoneState = z.object({ deviceId: z.string().min(8).max(80), waiting: z.number().int().min(0).max(100_000), isReady: z.boolean().nullable().default(null), deviceTime: isoTime });
export type PhoneState = z.infer<typeof phoneState>;

export const phoneAnswer = z.object({ isLost: z.boolean(), serverTime: z.string() });
export type PhoneAnswer = z.infer<typeof phoneAnswer>;

export const phoneView = z.object({
  id,
  person: z.string(),
  lastContactAt: z.string(),
  /** When the last reading of this phone was received: what is younger may be missing. */
  lastReadingAt: z.string().nullable(),
  waiting: z.number().int(),
  isReady: z.boolean().nullable(),
  clockOffMin: z.number().int(),
  lost: z.object({ at: z.string(), by: z.string() }).nullable(),
  emptiedAt: z.string().nullable(),
});
export type PhoneView = z.infer<typeof phoneView>;

const pin = z.string().regex(/^\d{4,8}$/, 'A PIN has four to eight figures.');

/** Somebody of the crew without e-mail: signs in on a shared phone with the crew code, the name and a PIN. */
export const newCrewPerson = z.object({ name: z.string().trim().min(1, 'Give the name.').max(120), language: language.default('en'), pin });
export type NewCrewPerson = z.infer<typeof newCrewPerson>;
export const newPin = z.object({ pin });

export const crewCodeMade = z.object({ code: z.string(), expiresAt: z.string() });
export const crewCodeState = z.object({ expiresAt: z.string().nullable(), people: z.array(z.object({ id, name: z.string(), hasPin: z.boolean(), lockedUntil: z.string().nullable() })) });
export type CrewCodeState = z.infer<typeof crewCodeState>;

const code = z.string().trim().min(4).max(40);
export const crewCodeTyped = z.object({ code });
export const crewSignIn = z.object({ code, personId: id, pin });
export const crewOffer = z.object({ estate: z.string(), people: z.array(z.object({ id, name: z.string() })) });
export type CrewOffer = z.infer<typeof crewOffer>;

/** A phone was lost, or was found again. */
export const lossReport = z.object({ isLost: z.boolean() });
