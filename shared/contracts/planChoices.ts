import { z } from 'zod';
import { shortName } from './common.ts';
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
  /** What one sample costs beside the time, at a laboratory for example. */
  moneyPerSample: z.number().min(0).max(10_000).optional(),
  /** Spreads typed by hand in place of those found, by zone number, in the measure's own form (unit, or share of the mean). */
  spreads: z.record(z.string(), z.number().positive().max(10_000)).optional(),
  /** Means expected, typed by hand in place of those found, by zone number, in the unit: between shares of the mean and the unit they decide. */
  means: z.record(z.string(), z.number().min(-1_000_000).max(1_000_000)).optional(),
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

/** Which vines may be drawn. Missing, replanted and off-type vines never are. */
export const drawChoices = z.object({
  /** Rows left out on either side of the block. */
  edgeRows: z.number().int().min(0).max(20).default(1),
  /** Vines left out at both ends of each piece of a row. */
  endVines: z.number().int().min(0).max(50).default(2),
  /** Metres kept from the border of another zone; a cell of the grid when null. */
  borderM: z.number().min(0).max(100).nullable().default(null),
});
export type DrawChoices = z.infer<typeof drawChoices>;

const slopeSpeed = z.number().min(0.05).max(1);

/** How fast people walk between vines. */
export const paceChoices = z.object({
  /** On level ground; slower on slopes. */
  kmPerHour: z.number().min(0.5).max(10).default(3.01),
  /** Whether slopes of the elevation layer slow the walk. */
  onSlopes: z.boolean().default(true),
  /** What slopes of 5 to 15, 15 to 30 and over 30 percent leave of that speed; in the proportions of `USUAL_PACE` when left out. */
  slopeSpeeds: z.tuple([slopeSpeed, slopeSpeed, slopeSpeed]).optional(),
});
export type PaceChoices = z.infer<typeof paceChoices>;

/** Everything a person decides about a plan. The same choices on the same ground give the same plan. */
export const planChoices = z.object({
  measures: z.array(plannedMeasure).min(1, 'Choose at least one measure.').max(40, 'A plan takes up to 40 measures.').refine((list) => new Set(list.map(({ code }) => code)).size === list.length, 'Each measure can be in a plan once.'),
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
  /** Share of visits in which a change between two visits shall be noticed; 0.8 by common practice. */
  changePower: z.number().min(0.5).max(0.99).default(0.8),
  spread: spreadChoices.prefault({}),
  /** Speak for the vines of this zone, or for more than them (the process, another season): then no zone runs out of vines. */
  population: z.enum(['zone', 'endless']).default('zone'),
  draw: drawChoices.prefault({}),
  /** Share of the vines drawn in each zone that get a reserve vine, in the order of the draw. */
  reserveShare: z.number().min(0).max(1).default(1),
  pace: paceChoices.prefault({}),
  /** Plan with the upper limit of the spread (`spread.upperLevel`), instead of the estimate. */
  isCautious: z.boolean().default(false),
  /** Least vines in a zone; the estate's own when left out. */
  minimum: z.number().int().min(2).max(200).optional(),
  limits: z.object({
    visitsPerZone: z.number().int().min(2).max(2000).optional(),
    hours: z.number().positive().max(1000).nullable().optional(),
    /** Share of a zone's work that dividing it must save to be recommended; a fifth when left out. */
    worthDividing: z.number().min(0).max(0.9).optional(),
  }).default({}),
  /** Finding a vine and setting up there; with the way to it in plans whose basis has no walks. */
  secondsPerVine: z.number().min(0).max(3600).default(15),
  /** Seconds more at each vine of a zone, by its number: steep, netted or dense ground. */
  zoneSeconds: z.record(z.string(), z.number().min(0).max(3600)).default({}),
  moneyPerHour: z.number().min(0).max(10_000).optional(),
  people: z.number().int().min(1).max(20).default(1),
});
export type PlanChoices = z.infer<typeof planChoices>;
export type PlanChoicesInput = z.input<typeof planChoices>;

/** What the basis of a plan depends on, as an address carries it. */
export const basisQuestion = z.object({
  seasonWeight: z.coerce.number().optional(),
  shrinkage: z.string().optional(),
  priorDf: z.coerce.number().optional(),
  upperLevel: z.coerce.number().optional(),
  outliers: z.string().optional(),
  edgeRows: z.coerce.number().optional(),
  endVines: z.coerce.number().optional(),
  borderM: z.coerce.number().optional(),
}).transform(({ edgeRows, endVines, borderM, ...spread }) => {
  const draw: z.input<typeof drawChoices> = { edgeRows, endVines, borderM };
  return { spread, draw };
}).pipe(z.object({ spread: spreadChoices, draw: drawChoices }));
export type BasisChoices = Pick<PlanChoices, 'spread' | 'draw'>;

export const MOST_SEED = 2_147_483_647;
const seed = z.number().int().min(0).max(MOST_SEED);
/** Time at a vine and walking speed are the estate's own when left out. */
export const newPlan = planChoices.extend({
  name: shortName,
  seed: seed.optional(),
  secondsPerVine: planChoices.shape.secondsPerVine.unwrap().optional(),
  pace: paceChoices.extend({ kmPerHour: paceChoices.shape.kmPerHour.unwrap().optional() }).prefault({}),
});
export type NewPlan = z.infer<typeof newPlan>;
/** The seed is not here: drawing again needs a reason (`planRedraw`), so that nobody rolls until the vines look nice. */
export const planChange = z.object({ name: shortName.optional(), choices: planChoices.optional() });
export type PlanChange = z.infer<typeof planChange>;
export const planRedraw = z.object({ reason: z.string().trim().min(5, 'Say why the vines are drawn again.').max(400), seed: seed.optional() });
