import { z } from 'zod';
import { id, isoDate, isoTime } from './common.ts';

/** An entry restriction as a responsible person typed it from the label. Nothing here is computed from a product. */
export const newRestriction = z
  .object({
    blockId: id,
    /** Only these rows; null is the whole block. */
    rowIds: z.array(id).min(1).nullable().default(null),
    startsAt: isoTime,
    endsAt: isoTime,
    product: z.string().trim().min(1, 'Name the product.').max(120),
    labelInterval: z.string().trim().min(1, 'Type the interval as the label gives it.').max(120),
    /** Pre-harvest interval, kept apart from entry. */
    noPickBefore: isoDate.nullable().default(null),
    note: z.string().trim().max(600).default(''),
  })
  .refine((restriction) => Date.parse(restriction.endsAt) > Date.parse(restriction.startsAt), { message: 'The end must be after the start.', path: ['endsAt'] });
export type NewRestriction = z.infer<typeof newRestriction>;

/** Ends entry early, and nothing else: the pre-harvest interval stays. */
export const restrictionLift = z.object({ reason: z.string().trim().min(5, 'Say why it is lifted early.').max(400) });

/**
 * Grounds on which the day before which nothing may be picked is changed. It follows from what was applied and from the
 * label, so it is put right or read again, never waived.
 */
export const pickIntervalBases = ['mistyped', 'notApplied', 'labelAllows'] as const;
export type PickIntervalBasis = (typeof pickIntervalBases)[number];

export const pickIntervalChange = z
  .object({
    /** Null where no interval holds. */
    noPickBefore: isoDate.nullable(),
    basis: z.enum(pickIntervalBases),
    reason: z.string().trim().min(10, 'Say what the label or the spray record says, in ten letters or more.').max(400),
  })
  .refine(({ basis, noPickBefore }) => basis !== 'notApplied' || noPickBefore === null, { message: 'Where nothing was applied there is no interval: leave the day empty.', path: ['noPickBefore'] })
  .refine(({ basis, noPickBefore }) => basis !== 'labelAllows' || noPickBefore !== null, { message: 'Give the first day on which the label allows picking.', path: ['noPickBefore'] });
export type NewPickInterval = z.infer<typeof pickIntervalChange>;

export const restrictionView = z.object({
  id,
  blockId: id,
  blockName: z.string(),
  rowIds: z.array(id).nullable(),
  startsAt: z.string(),
  endsAt: z.string(),
  product: z.string(),
  labelInterval: z.string(),
  noPickBefore: z.string().nullable(),
  note: z.string(),
  setBy: z.string(),
  /** Entry, lifted early. */
  lifted: z.object({ at: z.string(), by: z.string(), reason: z.string() }).nullable(),
  /** Changes of `noPickBefore`, oldest first; `withEntry` when one decision ended both, as was done once. */
  pickChanges: z.array(z.object({ at: z.string(), by: z.string(), reason: z.string(), basis: z.enum([...pickIntervalBases, 'withEntry']), before: z.string().nullable(), after: z.string().nullable() })),
  inForce: z.boolean(),
});
export type RestrictionView = z.infer<typeof restrictionView>;
