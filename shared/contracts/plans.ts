import { z } from 'zod';
import { postColour } from './blocks.ts';
import { id, lonLat, shortName } from './common.ts';
import { confidence, marginKind } from './measures.ts';

export const planAllocations = ['leastCost', 'equal', 'area', 'spread', 'spreadAndCost'] as const;

/** What is taken of a vine: clusters, and berries of each. Spreads are in the measure's own form, like its spread between vines. */
export const handful = z.object({
  perVine: z.number().int().min(1).max(50).default(1),
  /** Null: whole clusters. */
  perCluster: z.number().int().min(1).max(500).nullable().default(null),
  withinVine: z.number().min(0),
  withinCluster: z.number().min(0).default(0),
  /** What was taken when the spread between vines was measured. */
  nowPerVine: z.number().int().min(1).max(50).default(1),
  nowPerCluster: z.number().int().min(1).max(500).nullable().default(null),
  secondsPerCluster: z.number().min(0).max(3600).default(20),
  secondsPerBerry: z.number().min(0).max(600).default(2),
});
export type Handful = z.infer<typeof handful>;

/** One measure of a plan with what the manager asks of it. */
export const plannedMeasure = z.object({
  code: z.string().min(1).max(40),
  /** In the unit when absolute, a share when relative; the measure's own when left out. */
  margin: z.number().positive().max(10_000).optional(),
  marginKind: marginKind.optional(),
  confidence: confidence.optional(),
  /** At the vine, for one sample. */
  secondsPerSample: z.number().min(0).max(7200).optional(),
  /** Spreads typed by hand in place of those found, by zone number, in the measure's own form (unit, or share of the mean). */
  spreads: z.record(z.string(), z.number().positive().max(10_000)).optional(),
  handful: handful.optional(),
});
export type PlannedMeasureChoice = z.infer<typeof plannedMeasure>;

/** How the spread that a plan assumes is found in earlier readings. */
export const spreadChoices = z.object({
  /** What a season counts for beside the one after it: 1 counts all alike. */
  seasonWeight: z.number().min(0.1).max(1).default(0.7),
  /** How zones with few readings are pulled towards the wider pool: as their scatter says, by `priorDf`, or not at all. */
  shrinkage: z.enum(['auto', 'fixed', 'none']).default('auto'),
  /** Weight of the wider pool, in degrees of freedom. */
  priorDf: z.number().min(1).max(60).default(6),
  /** Chance that the spread is no larger than what a cautious plan takes. */
  upperLevel: z.number().min(0.5).max(0.99).default(0.8),
  /** Whether readings far from the rest count. */
  outliers: z.enum(['out', 'in']).default('out'),
});
export type SpreadChoices = z.infer<typeof spreadChoices>;
/** The same as an address carries it. */
export const spreadQuestion = z.object({
  seasonWeight: z.coerce.number().optional(),
  shrinkage: z.string().optional(),
  priorDf: z.coerce.number().optional(),
  upperLevel: z.coerce.number().optional(),
  outliers: z.string().optional(),
}).pipe(spreadChoices);

/** Everything a person decides about a plan. The same choices on the same ground give the same plan. */
export const planChoices = z.object({
  measures: z.array(plannedMeasure).min(1, 'Choose at least one measure.').max(12).refine((list) => new Set(list.map(({ code }) => code)).size === list.length, 'Each measure can be in a plan once.'),
  /** Each zone's own mean within its margin, or the mean of the block. */
  question: z.enum(['eachZone', 'block']).default('eachZone'),
  allocation: z.enum(planAllocations).default('leastCost'),
  /** Zones sampled as one, by number: one count, one draw and one mean for their vines. The zones themselves stay. */
  pools: z.array(z.array(z.number().int()).min(2, 'Zones are pooled two or more at a time.')).max(20).default([]).refine((pools) => new Set(pools.flat()).size === pools.flat().length, 'Each zone can be in one pool only.'),
  isPilot: z.boolean().default(false),
  pilotVines: z.number().int().min(2).max(500).default(20),
  /** Where a pilot was read, its own spread decides by the two-stage rule. */
  afterPilot: z.boolean().default(false),
  /** Whether later visits read the same vines or new ones. */
  revisit: z.enum(['same', 'new']).default('same'),
  /** How two readings of one vine go together from visit to visit; 0 when they do not. */
  correlation: z.number().min(0).max(0.99).default(0.5),
  spread: spreadChoices.prefault({}),
  /** Plan with the upper limit of the spread (`spread.upperLevel`), instead of the estimate. */
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
  /** The same raised to its upper limit. */
  cautious: z.number(),
  source: z.enum(['zone', 'block', 'estate', 'trade']),
  n: z.number().int(),
  seasons: z.array(z.number()),
  df: z.number().nullable(),
  outliers: z.number().int(),
  /** The zone's own spread with the readings far from the rest, and without them. */
  withOutliers: z.number().nullable(),
  withoutOutliers: z.number().nullable().default(null),
  /** Mean expected there; null when nothing is known. */
  expectedMean: z.number().nullable(),
  isMeanAssumed: z.boolean(),
});
export type BasisSpread = z.infer<typeof basisSpread>;

/** What a pilot read in a zone: spread in the measure's own form, pooled within its visits. */
export const pilotReadings = z.object({ n: z.number().int(), df: z.number().int(), spread: z.number() });

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
  sampledUnit: z.string().default('vine'),
  tradeSource: z.string(),
  /** One a zone, in the order of the zones. */
  spreads: z.array(basisSpread),
  /** One a zone; null where the pilot read fewer than two vines. */
  pilots: z.array(pilotReadings.nullable()).default([]),
});
export type BasisMeasure = z.infer<typeof basisMeasure>;

export const basisZone = z.object({ id, number: z.number().int(), name: z.string(), colour: z.string().nullable(), vines: z.number().int(), eligible: z.number().int(), /** Zone numbers that it stands for, where zones are sampled as one. */ members: z.array(z.number().int()).optional() });
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
  /** The latest pilot of this block and season, and how many of its vines were read. */
  pilot: z.object({ planId: id, name: z.string(), vines: z.number().int(), read: z.number().int() }).nullable().default(null),
  settings: z.object({ floorVines: z.number(), impracticalSamples: z.number(), dayHours: z.number(), costPerHour: z.number(), currency: z.string() }),
});
export type PlanBasis = z.infer<typeof planBasis>;

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
  people: z.array(z.object({ lengthM: z.number(), walkingS: z.number(), serviceS: z.number(), path: z.array(z.tuple([z.number(), z.number()])), targetIds: z.array(id) })),
});
export type PlanWalk = z.infer<typeof planWalk>;

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
