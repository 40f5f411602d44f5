import { z } from 'zod';
import { permissions, type Permission, type Reach } from '../catalog/permissions.ts';
import { roles } from '../catalog/roles.ts';
import { id, language, themes, units } from './common.ts';
import { estateSettings, seasonView } from './estate.ts';

export const credentials = z.object({ email: z.string().trim().toLowerCase().min(3).max(200), password: z.string().min(1).max(200) });
export type Credentials = z.infer<typeof credentials>;

const permissionIds = Object.keys(permissions) as [Permission, ...Permission[]];
const reach = z.enum(['read', 'own', 'propose', 'do'] satisfies [Reach, ...Reach[]]);

export const sessionEstate = z.object({
  id,
  name: z.string(),
  roles: z.array(z.enum(roles)),
  /** How far each action reaches for this person here; an action that is missing is not allowed. */
  permissions: z.partialRecord(z.enum(permissionIds), reach),
  season: seasonView.nullable(),
  /** The estate's days begin by it. */
  timeZone: z.string(),
  settings: estateSettings,
  marker: z.tuple([z.number(), z.number()]).nullable(),
  isDemo: z.boolean(),
});
export type SessionEstate = z.infer<typeof sessionEstate>;

export const sessionPerson = z.object({ id, name: z.string(), email: z.string().nullable(), language, units, theme: themes });

export const session = z.object({ person: sessionPerson.nullable(), estates: z.array(sessionEstate), csrfToken: z.string(), demo: z.boolean() });
export type Session = z.infer<typeof session>;

export const personChange = z.object({
  name: z.string().trim().min(1, 'Give your name.').max(120).optional(),
  language: language.optional(),
  units: units.optional(),
  theme: themes.optional(),
});
