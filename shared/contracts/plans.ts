import { z } from 'zod';
import { postColour } from './blocks.ts';
import { id, shortName } from './common.ts';
import { confidence, marginKind } from './measures.ts';

export const planAllocations = ['leastCost', 'equal', 'area', 'spread', 'spreadAndCost'] as const;

/** One measure of a plan with what the manager asks of it. */
export const plannedMeasure = z.object({
  code: z.string().min(1).max(40),
  /** In the unit when absolute, a share when relative; the measure's own when left out. */
  margin: z.number().positive().max(10_000).optional(),
  marginKind: marginKind.optional(),
  confidence: confidence.optional(),
});
export type PlannedMeasureChoice = z.infer<typeof plannedMeasure>;

/** Everything a person decides about a plan. The same choices on the same ground give the same plan. */
export const planChoices = z.object({
  measures: z.array(plannedMeasure).min(1, 'Choose at least one measure.').max(12).refine((list) => new Set(list.map(({ code }) => code)).size === list.length, 'Each measure can be in a plan once.'),
  /** Each zone's own mean within its margin, or the mean of the block. */
  question: z.enum(['eachZone', 'block']).default('eachZone'),
  allocation: z.enum(planAllocations).default('leastCost'),
  isPilot: z.boolean().default(false),
  pilotVines: z.number().int().min(2).max(500).default(20),
  /** Plan with the spread that is exceeded one time in five only, instead of the estimate. */
  isCautious: z.boolean().default(false),
  /** Least vines in a zone; the estate's own when left out. */
  minimum: z.number().int().min(2).max(200).optional(),
  limits: z.object({ visitsPerZone: z.number().int().min(2).max(2000).optional(), hours: z.number().positive().max(1000).nullable().optional() }).default({}),
  /** Walking to a vine and setting up there. */
  secondsPerVine: z.number().min(0).max(3600).default(45),
  moneyPerHour: z.number().min(0).max(10_000).optional(),
  people: z.number().int().min(1).max(20).default(1),
});
export type PlanChoices = z.infer<typeof planChoices>;
export type PlanChoicesInput = z.input<typeof planChoices>;

const seed = z.number().int().min(0).max(2_147_483_647);
export const newPlan = planChoices.extend({ name: shortName, seed: seed.optional() });
export type NewPlan = z.infer<typeof newPlan>;
/** The seed is not here: drawing again needs a reason (`planRedraw`), so that nobody rolls until the vines look nice. */
export const planChange = z.object({ name: shortName.optional(), choices: planChoices.optional() });
export type PlanChange = z.infer<typeof planChange>;
export const planRedraw = z.object({ reason: z.string().trim().min(5, 'Say why the vines are drawn again.').max(400), seed: seed.optional() });

const spreadKind = z.enum(['sd', 'cv']);

/** Vine-to-vine spread that a plan assumes in a zone, and where it comes from. */
export const basisSpread = z.object({
  kind: spreadKind,
  value: z.number(),
  /** The same raised to what is exceeded one time in five. */
  cautious: z.number(),
  source: z.enum(['zone', 'block', 'estate', 'trade']),
  n: z.number().int(),
  seasons: z.array(z.number()),
  df: z.number().nullable(),
  outliers: z.number().int(),
  withOutliers: z.number().nullable(),
  /** Mean expected there; null when nothing is known. */
  expectedMean: z.number().nullable(),
  isMeanAssumed: z.boolean(),
});
export type BasisSpread = z.infer<typeof basisSpread>;

export const basisMeasure = z.object({
  code: z.string(),
  name: z.string(),
  unit: z.string(),
  decimals: z.number().int(),
  margin: z.number(),
  marginKind,
  confidence,
  secondsPerSample: z.number(),
  skewed: z.boolean(),
  measuredIn: z.enum(['field', 'lab']),
  tradeSource: z.string(),
  /** One a zone, in the order of the zones. */
  spreads: z.array(basisSpread),
});
export type BasisMeasure = z.infer<typeof basisMeasure>;

export const basisZone = z.object({ id, number: z.number().int(), name: z.string(), colour: z.string().nullable(), vines: z.number().int(), eligible: z.number().int() });
export type BasisZone = z.infer<typeof basisZone>;

/** What a plan is computed from: the browser computes the same answer from it as the server stores. */
export const planBasis = z.object({
  zoningId: id,
  zoningNumber: z.number().int(),
  blockId: id,
  blockName: z.string(),
  seasonId: id,
  seasonName: z.string(),
  zones: z.array(basisZone),
  measures: z.array(basisMeasure),
  settings: z.object({ floorVines: z.number(), impracticalSamples: z.number(), dayHours: z.number(), costPerHour: z.number(), currency: z.string() }),
});
export type PlanBasis = z.infer<typeof planBasis>;

export const planState = z.enum(['draft', 'locked', 'closed']);

export const drawnTarget = z.object({
  id,
  rowId: id,
  rowLabel: z.string(),
  ordinal: z.number().int(),
  vineNumber: z.number().int(),
  zone: z.number().int(),
  drawOrder: z.number().int(),
  walkOrder: z.number().int().nullable(),
  reserve: z.object({ rowId: id, rowLabel: z.string(), ordinal: z.number().int(), vineNumber: z.number().int() }).nullable(),
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

export const plannableZoning = z.object({ id, number: z.number().int(), blockId: id, blockName: z.string() });
export type PlannableZoning = z.infer<typeof plannableZoning>;

/** Plans of the estate, and the zones in force that a plan can be made on. */
export const planList = z.object({ items: z.array(planSummary), total: z.number().int(), zonings: z.array(plannableZoning) });
export type PlanList = z.infer<typeof planList>;
