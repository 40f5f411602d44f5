import { z } from 'zod';
import { postColour } from './blocks.ts';
import { id, lonLat } from './common.ts';
import { planBasis } from './planBasis.ts';
import { plannedMeasure, planChoices } from './planChoices.ts';

/** How far a zone is for one measure, with what was read on the latest visit. */
export const planStanding = z.object({
  zone: z.number().int(),
  measureCode: z.string(),
  n: z.number().int(),
  planned: z.number().int(),
  say: z.enum(['enough', 'goOn', 'walkOn', 'allRead']),
  more: z.number().int().nullable(),
  mean: z.number().nullable(),
  halfWidth: z.number().nullable(),
  /** In the unit. */
  margin: z.number().nullable(),
  confidence: z.number(),
});
export type PlanStanding = z.infer<typeof planStanding>;

/** A zone that asks for too much, divided along a layer where its readings say that this is cheaper. */
export const zoneDivision = z.object({
  zone: z.string(),
  measureCode: z.string(),
  layerId: id,
  layerName: z.string(),
  division: z.object({
    cut: z.number(),
    vines: z.tuple([z.number(), z.number()]),
    spreads: z.tuple([z.number(), z.number()]),
    counts: z.tuple([z.number(), z.number()]),
    total: z.number(),
    saving: z.number(),
    recommended: z.boolean(),
  }),
  /** Means of the two parts' readings. */
  means: z.tuple([z.number(), z.number()]),
  /** Number the second part would take, and its vines along the rows: what the zone editor gives to it. */
  newZone: z.number().int(),
  rows: z.array(z.object({ rowId: id, from: z.number().int(), to: z.number().int() })),
});
export type ZoneDivision = z.infer<typeof zoneDivision>;
export const divisionQuestion = z.object({ choices: planChoices });

export const planState = z.enum(['draft', 'locked', 'closed']);

/** A vine as people in the block count it. `place` is given of a block without rows, where it is found by that. */
export const vineWords = z.object({ rowId: id, rowLabel: z.string(), ordinal: z.number().int(), vineNumber: z.number().int(), place: lonLat.optional() });
export type VineWords = z.infer<typeof vineWords>;

export const drawnTarget = z.object({
  id,
  ...vineWords.shape,
  zone: z.number().int(),
  drawOrder: z.number().int(),
  walkOrder: z.number().int().nullable(),
  reserve: vineWords.nullable(),
  measures: z.array(z.string()),
  position: z.tuple([z.number(), z.number()]),
});
export type DrawnTarget = z.infer<typeof drawnTarget>;

export const zoneDrawFacts = z.object({
  zone: z.number().int(),
  wanted: z.number().int(),
  drawn: z.number().int(),
  eligible: z.number().int(),
  relaxed: z.array(z.enum(['zoneBorder', 'endVines', 'edgeRows', 'allEnds'])),
  places: z.number().int(),
});

export const walkFacts = z.object({ lengthM: z.number(), walkingS: z.number(), serviceS: z.number(), isGateAssumed: z.boolean(), isGroundAssumedOpen: z.boolean() });

export const oldDraw = z.object({ at: z.string(), by: z.string(), reason: z.string(), seed: z.number(), vines: z.number().int() });

export const planSummary = z.object({
  id,
  name: z.string(),
  state: planState,
  isPilot: z.boolean(),
  zoningId: id,
  zoningNumber: z.number().int(),
  /** The zones in force instead, where those of the plan have been replaced. */
  replacedBy: z.object({ id, number: z.number().int() }).nullable(),
  blockId: id,
  blockName: z.string(),
  vines: z.number().int(),
  hours: z.number(),
  measures: z.array(z.string()),
  rounds: z.number().int(),
  createdAt: z.string(),
  lockedAt: z.string().nullable(),
});
export type PlanSummary = z.infer<typeof planSummary>;

export const planView = planSummary.extend({
  choices: planChoices,
  seed: z.number(),
  basis: planBasis,
  draw: z.array(zoneDrawFacts),
  walk: walkFacts.nullable(),
  targets: z.array(drawnTarget),
  /** Zones along the rows, for the row strip. */
  runs: z.array(z.object({ rowId: id, runs: z.array(z.object({ zone: z.number().int(), from: z.number().int(), to: z.number().int() })) })),
  startPostColour: postColour,
  endPostColour: postColour,
  oldDraws: z.array(oldDraw),
});
export type PlanView = z.infer<typeof planView>;

/** What a new plan on other zones takes over from an earlier plan of the block. */
export const earlierPlan = z.object({
  id,
  name: z.string(),
  zoningNumber: z.number().int(),
  seasonName: z.string(),
  /** As asked then; without measures where none of them is in use any more. */
  choices: planChoices.extend({ measures: z.array(plannedMeasure) }),
  /** What does not make sense there: zones of that plan, by number, of which something was said that fits no zone now, and measures out of use. */
  leftOut: z.object({ zones: z.array(z.number().int()), measures: z.array(z.object({ code: z.string(), name: z.string() })) }),
});
export type EarlierPlan = z.infer<typeof earlierPlan>;

export const plannableZoning = z.object({ id, number: z.number().int(), blockId: id, blockName: z.string() });
export type PlannableZoning = z.infer<typeof plannableZoning>;

/** Plans of the estate, the zones in force that a plan can be made on, and the blocks that have none. */
export const planList = z.object({ items: z.array(planSummary), total: z.number().int(), zonings: z.array(plannableZoning), withoutZones: z.array(z.object({ id, name: z.string() })) });
export type PlanList = z.infer<typeof planList>;
