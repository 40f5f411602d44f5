import { z } from 'zod';
import { areaGeometry, id, lineGeometry, multiPolygonGeometry, shortName } from './common.ts';

const weight = z.number().min(0).max(10);
const ordinal = z.number().int().min(-10_000).max(100_000);
const zoneNumber = z.number().int().min(1).max(60);

export const zoningOptions = z.object({
  layers: z.array(z.object({ layerId: id, weight: weight.nullable().default(null) })).min(1, 'Choose at least one layer.').max(20).refine((layers) => new Set(layers.map(({ layerId }) => layerId)).size === layers.length, 'A layer is chosen twice; choose each once.'),
  zones: z.union([z.literal('advise'), z.number().int().min(1).max(6)]).default('advise'),
  standardise: z.enum(['plain', 'robust']).default('plain'),
  smoothingM: z.number().min(0).max(50).default(3),
  smallestPatchHa: z.number().min(0).max(5).default(0.05),
  narrowestRows: z.number().min(0).max(20).default(0),
  borders: z.enum(['free', 'wholeRow', 'partRow']).default('free'),
  principalComponents: z.boolean().default(false),
  /** Other blocks zoned as one with this block: zones of one number are then of one kind in all. */
  withBlocks: z.array(id).max(40).default([]),
});
export type ZoningRequestOptions = z.infer<typeof zoningOptions>;

export const newZoning = zoningOptions.extend({
  layers: zoningOptions.shape.layers.refine((layers) => layers.length === 0 || layers.some(({ weight: given }) => given !== 0), 'Every layer has weight 0; give at least one a weight above it.'),
  /** Left out, it is what suits the block. */
  smallestPatchHa: zoningOptions.shape.smallestPatchHa.unwrap().optional(),
  name: z.string().trim().max(80).default(''),
  seed: z.number().int().min(0).max(4_294_967_295).default(1),
});
export type NewZoning = z.infer<typeof newZoning>;

export const zoningStates = ['running', 'proposed', 'draft', 'live', 'retired', 'failed'] as const;

export const zoningLine = z.object({
  id,
  blockId: id,
  number: z.number().int(),
  name: z.string(),
  state: z.enum(zoningStates),
  /** Name of its season where a later one has begun: zones of several seasons may be in force, each set for its own. */
  pastSeason: z.string().nullable(),
  /** It failed because somebody stopped it. */
  isStopped: z.boolean(),
  verdict: z.enum(['one', 'test', 'several']).nullable(),
  /** False where the layers alone could not tell: a block too small, or no measured layer. */
  isJudged: z.boolean(),
  advisedZones: z.number().int().nullable(),
  chosenZones: z.number().int().nullable(),
  seed: z.number(),
  revision: z.number().int(),
  createdBy: z.string().nullable(),
  createdAt: z.string(),
  publishedAt: z.string().nullable(),
  jobId: id.nullable(),
});
export type ZoningLine = z.infer<typeof zoningLine>;

export const zoneLayerStats = z.object({ layerId: z.string(), n: z.number(), mean: z.number().nullable(), sd: z.number().nullable() });

export const zoneView = z.object({
  /** Null for a zone of a proposal that nobody kept yet. */
  id: id.nullable(),
  number: zoneNumber,
  name: z.string(),
  colour: z.string().nullable(),
  areaM2: z.number(),
  vines: z.number().int(),
  missing: z.number().int(),
  doubtfulShare: z.number().nullable(),
  patches: z.number().int(),
  layers: z.array(zoneLayerStats),
  geometry: multiPolygonGeometry,
});
export type ZoneView = z.infer<typeof zoneView>;

export const evidenceRow = z.object({
  k: z.number().int(),
  varianceExplained: z.number(),
  silhouette: z.number().nullable(),
  calinskiHarabasz: z.number().nullable(),
  stability: z.number().nullable(),
  /** How well the weakest zone comes back when ground is drawn anew, 0…1; null for runs of before. */
  holds: z.number().nullable(),
  gap: z.number().nullable(),
  /** Share of the differences away from borders that is left within the zones; null for runs of before. */
  calmWithin: z.number().nullable(),
  score: z.number().nullable(),
  patches: z.number().int(),
  smallestZoneHa: z.number(),
  /** Samples of one measure (°Brix where it is kept) that each zone would need, and the hours of a round. */
  samples: z.number().int().nullable(),
  hours: z.number().nullable(),
});
export type EvidenceRow = z.infer<typeof evidenceRow>;

const figures = z.record(z.string(), z.number().nullable());
const reason = z.object({ code: z.string(), about: z.string().nullable(), figures });

export const zoningView = z.object({
  ...zoningLine.shape,
  blockName: z.string(),
  /** Names of the blocks it was zoned together with. */
  withBlockNames: z.array(z.string()),
  /** Cells that the zones were found on, metres: coarser than the block's own where a block zoned along has coarser ones. */
  cellSizeM: z.number(),
  /** What was asked; without layers where an older version kept it in another form. */
  options: zoningOptions.extend({ layers: z.array(z.object({ layerId: id, weight: weight.nullable().default(null) })) }),
  engineVersion: z.string(),
  layers: z.array(z.object({ layerId: id, name: z.string(), type: z.string(), unit: z.string(), measuredOn: z.string().nullable(), role: z.enum(['evidence', 'context']), weight: z.number(), advised: z.object({ weight: z.number(), code: z.string(), about: z.string().nullable(), figures }).nullable() })),
  /** Pearson's correlation of every two layers of numbers, over the smoothed cells that both have; none for runs of before. */
  layerPairs: z.array(z.object({ one: z.string(), other: z.string(), correlation: z.number() })),
  reasons: z.array(reason),
  /** Ground that stands out and that no number of zones shows; null without such ground, and for runs of before. */
  standsOut: multiPolygonGeometry.nullable(),
  alsoOffer: z.array(z.number().int()),
  evidence: z.array(evidenceRow),
  /** Of the zones that `zones` shows: lowest and highest mean of each layer of numbers, the spread left inside, and the share of its variance that lies between them (eta squared). */
  differences: z.array(z.object({ layerId: z.string(), lowest: z.number(), highest: z.number(), withinSd: z.number(), explained: z.number().nullable() })),
  warnings: z.array(reason),
  /** The zones tested on readings of fruit: analysis of variance by zone and a shuffle within rows. */
  fruit: z.array(z.object({ measure: z.string(), on: z.array(z.string()), n: z.number().int(), f: z.number().nullable(), dfBetween: z.number().nullable(), dfWithin: z.number().nullable(), omegaSquared: z.number().nullable(), leaveOneOutRSquared: z.number().nullable(), p: z.number(), shuffle: z.enum(['rows', 'free']) })),
  /** Number of zones that was tested on fruit; null before there is an outcome. */
  fruitZones: z.number().int().nullable(),
  /** The zones that its edits begin with were changed by hand in the version it was taken up from. */
  beginsByHand: z.boolean(),
  /** The number of the version that its edits begin with; null where they begin with zones as computed. */
  takenUpFrom: z.number().int().nullable(),
  /** How many zones its edits begin with, which may be fewer than were asked for; null before a number is kept. */
  beginsWith: z.number().int().nullable(),
  /** Number of zones that `zones` shows. */
  shown: z.number().int(),
  zones: z.array(zoneView),
  /** Whether it is known how surely cells belong to these zones as the run found them: `none` where it found one, `older` from before that was kept. */
  certainty: z.enum(['kept', 'none', 'older']),
  problem: z.string().nullable(),
});
export type ZoningView = z.infer<typeof zoningView>;

/** `revision`: the one on which a number of zones was chosen; left out, edits made meanwhile go with the draft that is begun anew. */
export const zoningChange = z.object({ name: z.string().trim().max(80), chosenZones: z.number().int().min(1).max(6), revision: z.number().int() }).partial();

const rowPart = z.object({ rowId: id, from: ordinal.nullable().default(null), to: ordinal.nullable().default(null) });

/** What the manager's hand can do; the server turns rows into ground and keeps the outcome as an ordered edit. */
export const zoneOperation = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('merge'), zones: z.array(zoneNumber).min(1), into: zoneNumber }),
  z.object({ kind: z.literal('split'), zone: zoneNumber, line: lineGeometry }),
  z.object({ kind: z.literal('splitAlongRow'), zone: zoneNumber, rowId: id }),
  z.object({ kind: z.literal('giveRows'), toZone: zoneNumber, rows: z.array(rowPart).min(1).max(2000) }),
  z.object({ kind: z.literal('giveArea'), toZone: zoneNumber, area: areaGeometry }),
  z.object({ kind: z.literal('rename'), zone: zoneNumber, name: shortName.nullable() }),
  z.object({ kind: z.literal('renumber'), numbers: z.array(z.object({ from: zoneNumber, to: zoneNumber })).min(1) }),
  z.object({ kind: z.literal('recolour'), zone: zoneNumber, colour: z.string().regex(/^#[0-9a-fA-F]{6}$/).nullable() }),
  z.object({ kind: z.literal('snap'), mode: z.enum(['wholeRow', 'partRow']), shortestRunM: z.number().min(1).max(500).default(20) }),
  z.object({ kind: z.literal('clean'), smallestPatchHa: z.number().min(0).max(5), narrowestRows: z.number().min(0).max(20).default(0) }),
]);
export type ZoneOperation = z.infer<typeof zoneOperation>;

export const zoneEditRequest = z.object({ operation: zoneOperation, reason: z.string().trim().max(400).default(''), revision: z.number().int() });
export const revisionOnly = z.object({ revision: z.number().int() });

export const zoneEditLine = z.object({ sequence: z.number().int(), operation: z.unknown(), reason: z.string(), undone: z.boolean(), author: z.string().nullable(), at: z.string() });
export type ZoneEditLine = z.infer<typeof zoneEditLine>;

/**
 * `replaces`: the version that was in force when the effects were read, null for none; left out, whatever is in force is replaced.
 * `callOff`: rounds under way in the block that are called off with it; the others go on as they are.
 */
export const publishRequest = z.object({ reason: z.string().trim().max(400).default(''), revision: z.number().int(), replaces: z.number().int().nullable().optional(), callOff: z.array(id).max(200).default([]) });

/** What publishing would touch; a zone that only gets another number is in `renumbered`, and nothing of it counts as moved. */
export const publishEffects = z.object({
  /** The season for which they come into force. */
  season: z.string(),
  replaces: z.number().int().nullable(),
  /** Zones that another season has in force and that the map shows until now; of a later season they stay there. */
  shownNow: z.object({ number: z.number().int(), season: z.string(), isLater: z.boolean() }).nullable(),
  readingsMoved: z.number().int(),
  readingsOutside: z.number().int(),
  vinesMoved: z.number().int(),
  renumbered: z.array(z.object({ from: zoneNumber, to: zoneNumber })),
  /** Rounds sent or under way, with their vines and how many of them have a reading. */
  openRounds: z.array(z.object({ id, planId: id, onDate: z.string(), people: z.array(z.string()), vines: z.number().int(), done: z.number().int() })),
  /** The new zones: vines, vines sampled this season, and further ones that rounds under way are to visit. */
  byZone: z.array(z.object({ zone: zoneNumber, vines: z.number().int(), sampled: z.number().int(), toVisit: z.number().int() })),
  plans: z.array(z.object({ id, name: z.string(), isDraft: z.boolean(), vines: z.number().int(), vinesMoved: z.number().int() })),
  lots: z.array(z.object({ id, name: z.string(), isPicked: z.boolean(), vinesMoved: z.number().int() })),
  underFloor: z.array(z.object({ zone: zoneNumber, sampled: z.number().int(), floor: z.number().int() })),
});
export type PublishEffects = z.infer<typeof publishEffects>;

/** `vinesMoved` by zone number; `vinesApart` when each zone is paired with the one it shares most vines with, whatever the numbers. */
export const zoningComparison = z.object({ vines: z.number().int(), vinesMoved: z.number().int(), vinesApart: z.number().int(), adjustedRand: z.number(), pairs: z.array(z.object({ from: z.number().int(), to: z.number().int(), vines: z.number().int() })) });
export type ZoningComparison = z.infer<typeof zoningComparison>;

const vineRun = z.object({ rowId: id, from: z.number().int(), to: z.number().int() });

/** Vines whose layers fit another zone nearly as well as their own, and the ground they stand on. */
export const zoningDoubt = z.object({ vines: z.number().int(), doubtful: z.number().int(), byZone: z.array(z.object({ zone: zoneNumber, vines: z.number().int() })), runs: z.array(vineRun), geometry: multiPolygonGeometry.nullable() });
export type ZoningDoubt = z.infer<typeof zoningDoubt>;

/** Zones as a run found them and how far each cell belongs to each: bytes in base 64, those of `shared/analysis/zoneMemberships.ts`. `changedByHand`: the zones kept are others by now. */
export const zoningMemberships = z.object({ changedByHand: z.boolean(), labels: z.string(), memberships: z.string() });
export type ZoningMemberships = z.infer<typeof zoningMemberships>;

/** Ground that keeps its rank in the block over the seasons of one kind of layer, changes it somewhat, or as much as chance would. */
export const groundKinds = ['steady', 'moving', 'chance'] as const;
const stableGround = z.object({
  layerId: id,
  type: z.string(),
  name: z.string(),
  /** One layer a season, the oldest first. */
  measuredOn: z.array(z.string()),
  shares: z.record(z.enum(groundKinds), z.number()),
  areas: z.array(z.object({ ground: z.enum(groundKinds), geometry: multiPolygonGeometry })),
});
export type StableGroundView = z.infer<typeof stableGround>;

/** How far zones and layers of other seasons agree: adjusted Rand index of zones by vine, `zones` of the other season and `ownZones` of this zoning's own number; of layers the rank correlation, the share of cells that stay in the same third, and where they keep their rank. */
export const zoningSeasons = z.object({
  ground: z.array(stableGround),
  zones: z.array(z.object({ zoningId: id, number: z.number().int(), season: z.string(), zones: z.number().int(), ownZones: z.number().int(), adjustedRand: z.number(), vinesApart: z.number().int(), vines: z.number().int() })),
  layers: z.array(z.object({ layerId: id, name: z.string(), measuredOn: z.string(), otherId: id, otherName: z.string(), otherMeasuredOn: z.string(), rankCorrelation: z.number(), sameThird: z.number(), cells: z.number().int() })),
});
export type ZoningSeasons = z.infer<typeof zoningSeasons>;

/** Who else has these zones open to edit, the revision that is kept now and who made it. */
export const zoningPresence = z.object({ revision: z.number().int(), changedBy: z.string().nullable(), others: z.array(z.object({ name: z.string(), seenAt: z.string() })) });
export type ZoningPresence = z.infer<typeof zoningPresence>;

export const exportFormatLine = z.object({ id: z.string(), mediaType: z.string(), extension: z.string() });
export type ExportFormatLine = z.infer<typeof exportFormatLine>;
