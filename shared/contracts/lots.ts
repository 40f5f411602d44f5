import { z } from 'zod';
import { changesOf, id, isoDate, shortName } from './common.ts';
import { suggestionView } from './suggestions.ts';

export const wineTypes = ['red', 'white', 'rose'] as const;
export const wineType = z.enum(wineTypes);
export type WineType = z.infer<typeof wineType>;

/** Ways to potential alcohol that need no more than °Brix. */
export const brixMethods = ['brixFactor', 'sugarTable', 'solidsLessAllowance'] as const;
export type BrixMethod = (typeof brixMethods)[number];
export const alcoholChoice = z.object({ method: z.enum(brixMethods) });

/** A figure with its range; `kind` says whether it was measured, estimated or assumed. */
export const figure = z.object({
  value: z.number(),
  standardError: z.number().nullable(),
  halfWidth: z.number().nullable(),
  n: z.number().int().nullable(),
  confidence: z.number(),
  kind: z.enum(['measured', 'estimated', 'assumed']),
  /** Standard errors by the factor they come from, such as one growth factor for all zones of a variety: figures that name the same factor are wrong together. */
  shared: z.record(z.string(), z.number()).optional(),
});
export type Figure = z.infer<typeof figure>;

export const yieldPart = z.object({ part: z.enum(['vines', 'clusters', 'clusterWeight', 'growth', 'losses']), share: z.number(), kind: z.enum(['measured', 'assumed']), value: z.number(), n: z.number().int().nullable() });

/** A live zone as the lots see it: what to expect of it, and how much of it is still free. */
export const lotZone = z.object({
  zoneId: id,
  blockId: id,
  blockName: z.string(),
  variety: z.string(),
  number: z.number().int(),
  zoneCount: z.number().int(),
  name: z.string(),
  areaHa: z.number(),
  vines: z.number().int(),
  bearing: z.number().int(),
  tonnes: figure,
  yieldParts: z.array(yieldPart),
  dominating: z.string().nullable(),
  latest: z.object({ brix: figure.nullable(), ph: figure.nullable(), ta: figure.nullable(), on: z.string().nullable() }),
  /** Figures of the lab that nobody has checked yet; they count in nothing here. */
  unchecked: z.number().int(),
  freeShare: z.number(),
  freeTonnes: z.number(),
  /** Rows that cross the zone, in order; `free` when none of its vines there is in a lot. */
  rows: z.array(z.object({ id, label: z.string(), free: z.boolean() })),
  inLots: z.array(z.object({ lotId: id, lotName: z.string(), share: z.number() })),
});
export type LotZone = z.infer<typeof lotZone>;

export const lotLine = z.object({
  zoneId: id.nullable(),
  blockId: id,
  blockName: z.string(),
  number: z.number().int(),
  zoneCount: z.number().int(),
  name: z.string(),
  vines: z.number().int(),
  bearing: z.number().int(),
  share: z.number(),
  areaHa: z.number(),
  tonnes: figure,
  /** Rows of a part of a zone; null when all of it is in the lot. */
  rowIds: z.array(id).nullable(),
  /** The lot without this zone; null with one zone or too few readings. */
  without: z.object({ brix: z.number(), betweenShare: z.number() }).nullable(),
});
export type LotLine = z.infer<typeof lotLine>;

export const lotSummary = z.object({
  areaHa: z.number(),
  vines: z.number().int(),
  bearing: z.number().int(),
  tonnes: figure.nullable(),
  dominating: z.string().nullable(),
  brix: figure.nullable(),
  ph: figure.nullable(),
  phViaHydrogen: z.number().nullable(),
  ta: figure.nullable(),
  weighting: z.enum(['tonnes', 'area']).nullable(),
  alcohol: z.object({ method: z.enum(brixMethods), low: z.number(), middle: z.number(), high: z.number() }).nullable(),
  /** As the tank would read it, by the estate's learned offset; null while that is off. */
  tankBrix: z.object({ figure, offset: z.number() }).nullable(),
  /** Lots that the litres a tonne were learned from; null for the custom of the trade. */
  litreSource: z.object({ must: z.number().int().nullable(), wine: z.number().int().nullable() }),
  mustL: figure.nullable(),
  wineL: figure.nullable(),
  betweenShare: z.number().nullable(),
  tank: z.object({ tankId: id, name: z.string(), workingL: z.number(), chanceOfFit: z.number(), chanceBelowMinimum: z.number() }).nullable(),
  /** Zones without a reading of the measure; their part is left out of its mean. */
  unknown: z.array(z.object({ measure: z.string(), zones: z.array(z.string()) })),
});
export type LotSummary = z.infer<typeof lotSummary>;

/** What somebody entered that rules out picking a lot on its day; `until` is a day for a pre-harvest interval, an instant for entry. */
export const pickStop = z.object({ restrictionId: id, kind: z.enum(['pick', 'entry']), blockName: z.string(), product: z.string(), labelInterval: z.string(), until: z.string(), setBy: z.string(), setAt: z.string() });
export type PickStop = z.infer<typeof pickStop>;

export const lotView = z.object({
  id,
  name: z.string(),
  wineType,
  state: z.enum(['draft', 'confirmed', 'picked']),
  pickOn: isoDate.nullable(),
  tankId: id.nullable(),
  version: z.number().int(),
  crew: z.string(),
  /** Its own way to potential alcohol; null for the estate's. */
  alcoholMethod: z.enum(brixMethods).nullable(),
  lines: z.array(lotLine),
  stops: z.array(pickStop),
  summary: lotSummary,
});
export type LotView = z.infer<typeof lotView>;

export const tankView = z.object({ id, name: z.string(), litres: z.number(), workingFill: z.number(), minimumFill: z.number() });
export type TankView = z.infer<typeof tankView>;

export const lotsBoard = z.object({
  scenarioId: id,
  /** How a proposal came about; null for lots that people made. */
  suggestion: suggestionView.nullable(),
  scenarios: z.array(z.object({ id, name: z.string(), isLive: z.boolean() })),
  seasonId: id,
  confidence: z.number(),
  /** The estate's way to potential alcohol, as it was on the day shown. */
  alcoholMethod: z.enum(brixMethods),
  zones: z.array(lotZone),
  lots: z.array(lotView),
  tanks: z.array(tankView),
  /** Who may lift what stops a pick. */
  mayLift: z.array(z.string()),
  /** The day it is shown as of, or null for now. */
  knownOn: z.string().nullable(),
  /** First day from which changes of the vine census are kept, where that is after `knownOn`: before it a vine is known by its last entry only. */
  censusFrom: z.string().nullable(),
});
export type LotsBoard = z.infer<typeof lotsBoard>;

export const newLot = z.object({
  name: shortName,
  wineType: wineType.default('red'),
  scenarioId: id.nullable().default(null),
  pickOn: isoDate.nullable().default(null),
  tankId: id.nullable().default(null),
  crew: z.string().trim().max(200).default(''),
  alcoholMethod: z.enum(brixMethods).nullable().default(null),
});
export const lotChange = z.object({ name: shortName, wineType, pickOn: isoDate.nullable(), tankId: id.nullable(), crew: z.string().trim().max(200), alcoholMethod: z.enum(brixMethods).nullable() }).partial();

/** The whole new content of a lot: zones of any block, each whole or by rows. */
export const lotParts = z.object({
  parts: z
    .array(z.object({ zoneId: id, rowIds: z.array(id).min(1).nullable().default(null) }))
    .max(200)
    .refine(
      (parts) => new Set(parts.map(({ zoneId }) => zoneId)).size === parts.length,
      'A zone stands there twice; name each once, with all its rows.',
    ),
});

/** What one lot holds of a zone goes into another. */
export const zoneMove = z.object({ zoneId: id, fromLotId: id, fromVersion: z.number().int(), toLotId: id, toVersion: z.number().int() });

const litres = z.number().positive('Litres must be above 0.').max(2_000_000);
const tankFacts = z.object({ name: shortName, litres, workingFill: z.number().gt(0).max(1).default(0.8), minimumFill: z.number().min(0).lt(1).default(0.5) });
export const newTank = tankFacts.refine(({ workingFill, minimumFill }) => minimumFill < workingFill, { path: ['minimumFill'], message: 'The least fill must be below the fill allowed.' });
export const tankChange = changesOf(tankFacts);
export const newScenario = z.object({ name: shortName, copyOf: id });

/** What can be picked and pressed on a day; without a day, on every day that has no line of its own. */
export const dayCapacity = z.object({
  day: isoDate.nullable().default(null),
  pickT: z.number().min(0).max(10_000).nullable().default(null),
  pressT: z.number().min(0).max(10_000).nullable().default(null),
  note: z.string().trim().max(200).default(''),
});
export const capacityView = z.object({ day: z.string().nullable(), pickT: z.number().nullable(), pressT: z.number().nullable(), note: z.string() });
export type CapacityView = z.infer<typeof capacityView>;

/** A decision on a lot with what the screen showed at that moment. */
export const decisionView = z.object({
  id,
  kind: z.enum(['confirm', 'notice']),
  decidedBy: z.string(),
  decidedAt: z.string(),
  shown: z.object({ lot: lotView, zones: z.array(lotZone), tank: tankView.nullable(), confidence: z.number() }),
});
export type DecisionView = z.infer<typeof decisionView>;
