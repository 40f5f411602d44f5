import { z } from 'zod';
import { id } from './common.ts';
import { confidence, marginKind, rowSide } from './measures.ts';

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

/** What a pilot read in a zone: spread in the measure's own form, pooled within its visits, and the mean. */
export const pilotReadings = z.object({ n: z.number().int(), df: z.number().int(), spread: z.number(), mean: z.number().nullable().default(null) });

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
  rowSide: rowSide.default('either'),
  tradeSource: z.string(),
  /** One a zone, in the order of the zones. */
  spreads: z.array(basisSpread),
  /** One a zone; null where the pilot read fewer than two vines. */
  pilots: z.array(pilotReadings.nullable()).default([]),
});
export type BasisMeasure = z.infer<typeof basisMeasure>;

export const basisZone = z.object({ id, number: z.number().int(), name: z.string(), colour: z.string().nullable(), vines: z.number().int(), eligible: z.number().int(), /** Zone numbers that it stands for, where zones are sampled as one. */ members: z.array(z.number().int()).optional() });
export type BasisZone = z.infer<typeof basisZone>;

/** What a walk past so many vines takes at the usual pace, on level ground and on the block's slopes. */
export const walkExpected = z.object({
  vines: z.number(),
  levelS: z.number(),
  slopedS: z.number(),
  /** Metres of it below 5, from 5 to 15, to 30 and over 30 percent; not known in plans made before it was looked into. */
  slopesM: z.array(z.number()).optional(),
});
export type WalkExpected = z.infer<typeof walkExpected>;

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
  /** Walks tried on this block, few vines to many; none in plans that were made before walks were tried, whose time per vine holds the way to it. */
  walks: z.array(walkExpected).default([]),
  /** Whether `walks` are those of vines that were drawn: then their time is no estimate. */
  isWalkLaid: z.boolean().default(false),
  settings: z.object({ floorVines: z.number(), impracticalSamples: z.number(), dayHours: z.number(), costPerHour: z.number(), currency: z.string(), walkingKmPerHour: z.number().optional(), setUpSeconds: z.number().optional() }),
});
export type PlanBasis = z.infer<typeof planBasis>;
