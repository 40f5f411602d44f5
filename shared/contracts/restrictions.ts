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

export const restrictionLift = z.object({ reason: z.string().trim().min(5, 'Say why it is lifted early.').max(400) });

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
  lifted: z.object({ at: z.string(), by: z.string(), reason: z.string() }).nullable(),
  inForce: z.boolean(),
});
export type RestrictionView = z.infer<typeof restrictionView>;
