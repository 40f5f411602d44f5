import { z } from 'zod';
import { id, lonLat } from './common.ts';

const asNumbers = z.string().transform((text) => text.split(',').map(Number)).pipe(lonLat);
export const walkQuestion = z.object({
  people: z.coerce.number().int().min(1).max(20).default(1),
  end: z.enum(['gate', 'anywhere']).default('gate'),
  /** "lon,lat"; the block's own gate when left out. */
  gate: asNumbers.nullable().default(null),
});
/** The walk of a plan as it would be sent. */
export const planWalk = z.object({
  gate: lonLat,
  isGateAssumed: z.boolean(),
  isEven: z.boolean(),
  /** Layer whose slopes slow the walk; null where the ground counts as level. */
  slopesFrom: z.string().nullable(),
  people: z.array(z.object({ lengthM: z.number(), walkingS: z.number(), serviceS: z.number(), path: z.array(z.tuple([z.number(), z.number()])), targetIds: z.array(id) })),
});
export type PlanWalk = z.infer<typeof planWalk>;

/** Plans to walk on one day, at the speed between their gates. */
export const dayQuestion = z.object({
  plans: z.array(id).min(2, 'Choose at least two plans.').max(12, 'At most twelve blocks a day.').refine((list) => new Set(list).size === list.length, 'Each plan once.'),
  kmPerHour: z.number().min(1).max(100).default(15),
  keepOrder: z.boolean().default(false),
});
export const dayWalk = z.object({
  blocks: z.array(z.object({ planId: id, planName: z.string(), blockName: z.string(), vines: z.number().int(), seconds: z.number(), travelS: z.number(), gate: lonLat })),
  totalS: z.number(),
});
export type DayWalk = z.infer<typeof dayWalk>;
