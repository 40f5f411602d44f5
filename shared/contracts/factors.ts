import { z } from 'zod';
import { id } from './common.ts';

export const factorKinds = ['growth', 'losses', 'mustL', 'wineL', 'tankOffset'] as const;
export type FactorKind = (typeof factorKinds)[number];

/** A factor learned from the estate's own lots; `about` is a variety, or the wine for litres a tonne. */
export const factorView = z.object({
  kind: z.enum(factorKinds),
  about: z.string(),
  n: z.number().int(),
  mean: z.number(),
  sd: z.number().nullable(),
  low: z.number().nullable(),
  high: z.number().nullable(),
  few: z.boolean(),
  isOn: z.boolean(),
  /** What is used while it is off; null where nothing is. */
  assumed: z.number().nullable(),
  lots: z.array(z.object({ lotName: z.string(), seasonName: z.string(), value: z.number() })),
});
export type FactorView = z.infer<typeof factorView>;

export const factorSwitch = z.object({ kind: z.enum(factorKinds), about: z.string().trim().min(1).max(80), isOn: z.boolean() });

/** What the cellar measured of a lot. Nothing is edited: a new entry counts instead of the one before. */
export const newCellarResult = z
  .object({
    mustL: z.number().positive().max(5_000_000).nullable().default(null),
    wineL: z.number().positive().max(5_000_000).nullable().default(null),
    tankBrix: z.number().min(5, 'Tank °Brix lies between 5 and 40.').max(40, 'Tank °Brix lies between 5 and 40.').nullable().default(null),
    leftOutKg: z.number().min(0).max(5_000_000).nullable().default(null),
    note: z.string().trim().max(500).default(''),
  })
  .refine(({ mustL, wineL, tankBrix, leftOutKg }) => [mustL, wineL, tankBrix, leftOutKg].some((value) => value !== null), { path: ['mustL'], message: 'Give at least one figure.' });

export const cellarResultView = z.object({ lotId: id, mustL: z.number().nullable(), wineL: z.number().nullable(), tankBrix: z.number().nullable(), leftOutKg: z.number().nullable(), note: z.string(), enteredBy: z.string(), enteredAt: z.string() });
export type CellarResultView = z.infer<typeof cellarResultView>;
