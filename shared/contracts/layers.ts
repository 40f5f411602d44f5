import { z } from 'zod';
import { setAsideReasons } from '../analysis/cleanPoints.ts';
import { layerTypeIds } from '../catalog/layerTypes.ts';
import { id, isoDate, shortName } from './common.ts';

/** red keeps a layer out of zoning unless somebody overrides it; amber is shown wherever the layer is; note is for the record. */
export const findingSeverities = ['red', 'amber', 'note'] as const;

export const layerFinding = z.object({
  code: z.string(),
  severity: z.enum(findingSeverities),
  params: z.record(z.string(), z.union([z.string(), z.number()])),
  /** Bit of its cells in the marks of the layer; without it the finding is about the whole block. */
  mark: z.number().int().min(0).max(7).optional(),
});
export type LayerFinding = z.infer<typeof layerFinding>;

export const layerClass = z.object({ value: z.number().int(), name: z.string().trim().min(1).max(80), colour: z.string().regex(/^#[0-9a-fA-F]{6}$/).nullable() });
export type LayerClass = z.infer<typeof layerClass>;

export const layerStatistics = z.object({
  n: z.number(),
  missing: z.number(),
  mean: z.number().nullable(),
  sd: z.number().nullable(),
  min: z.number().nullable(),
  max: z.number().nullable(),
  quantiles: z.array(z.object({ share: z.number(), value: z.number() })),
  histogram: z.object({ from: z.number(), to: z.number(), counts: z.array(z.number()) }).nullable(),
  /** Share of the covered area by class, for layers of classes. */
  classes: z.array(z.object({ value: z.number(), share: z.number() })).nullable(),
});
export type LayerStatistics = z.infer<typeof layerStatistics>;

/** How a surface was made of point readings, and what was set aside before. */
export const layerSurvey = z.object({
  method: z.enum(['kriging', 'inverseDistance']),
  /** Readings kept on and around the block, and places after readings in one cell became one. */
  readings: z.number().int(),
  places: z.number().int(),
  /** Cells farther than this from every reading are empty. */
  reachM: z.number(),
  model: z.object({ shape: z.enum(['spherical', 'exponential', 'smooth']), nugget: z.number(), partialSill: z.number(), rangeM: z.number() }).nullable(),
  bins: z.array(z.object({ pairs: z.number(), distanceM: z.number(), gamma: z.number() })),
  standardError: z.number().nullable(),
  setAside: z.array(z.object({ reason: z.enum(setAsideReasons), count: z.number().int() })),
  /** Reasons that a person took back: their readings count again. */
  taken: z.array(z.enum(setAsideReasons)),
});
export type LayerSurvey = z.infer<typeof layerSurvey>;

/** Readings set aside, where they were taken; at most some thousands, evenly chosen. */
export const asideReading = z.object({ lonLat: z.tuple([z.number(), z.number()]), reason: z.enum(setAsideReasons) });
export type AsideReading = z.infer<typeof asideReading>;

export const cleaningChange = z.object({ taken: z.array(z.enum(setAsideReasons)).max(setAsideReasons.length) });
export type CleaningChange = z.infer<typeof cleaningChange>;

/** Another layer of the block beside this one. */
export const layerBeside = z.object({
  id,
  name: z.string(),
  type: z.enum(layerTypeIds),
  measuredOn: isoDate.nullable(),
  correlation: z.number(),
  /** How the other must be moved to lie best on this one; null when it lies well or is of another kind. */
  shift: z.object({ eastM: z.number(), northM: z.number() }).nullable(),
});
export type LayerBeside = z.infer<typeof layerBeside>;

export const layerOverride = z.object({ by: z.string(), reason: z.string(), at: z.string() });

/** ready: no doubt; doubt: amber findings; blocked: red ones; overridden: red, and somebody answers for it; stale: made for an older outline. */
export const readiness = z.enum(['ready', 'doubt', 'blocked', 'overridden', 'stale']);
export type Readiness = z.infer<typeof readiness>;

/** A layer as it lies on one block. */
export const blockLayerView = z.object({
  id,
  blockId: id,
  type: z.enum(layerTypeIds),
  name: z.string(),
  unit: z.string(),
  measuredOn: isoDate.nullable(),
  coverage: z.number(),
  statistics: layerStatistics,
  findings: z.array(layerFinding),
  readiness,
  override: layerOverride.nullable(),
  /** Null for layers that are not made of points. */
  survey: layerSurvey.nullable(),
  classes: z.array(layerClass).nullable(),
  gridKey: z.string(),
  derivedFrom: id.nullable(),
  source: z.object({
    fileId: id.nullable(),
    fileName: z.string().nullable(),
    sha256: z.string().nullable(),
    value: z.string().nullable(),
    pixelSizeM: z.number().nullable(),
    reference: z.string().nullable(),
    answers: z.record(z.string(), z.unknown()),
  }),
  createdBy: z.string().nullable(),
  createdAt: z.string(),
});
export type BlockLayerView = z.infer<typeof blockLayerView>;

export const layerChange = z
  .object({ name: shortName, unit: z.string().trim().max(20), measuredOn: isoDate.nullable(), classes: z.array(layerClass).max(255) })
  .partial()
  .refine((change) => Object.keys(change).length > 0, 'Nothing to change was sent.');
export type LayerChange = z.infer<typeof layerChange>;

export const overrideChange = z.object({ blockId: id, reason: z.string().trim().min(5, 'Say why, in at least five letters.').max(400) });
export type OverrideChange = z.infer<typeof overrideChange>;

/** Where the cells of a layer lie; sent beside them in the header x-grid. */
export const cellsGrid = z.object({
  key: z.string(),
  epsg: z.number(),
  x0: z.number(),
  y0: z.number(),
  cellSizeM: z.number(),
  cols: z.number(),
  rows: z.number(),
  /** North-west, north-east, south-east, south-west, as a map image wants them. */
  cornersLonLat: z.array(z.tuple([z.number(), z.number()])).length(4),
});
export type CellsGrid = z.infer<typeof cellsGrid>;

/** Heights of the land round all blocks, for the map alone. `cells`: the same bytes as those of a layer, in base 64. */
export const reliefView = z.object({ cellSizeM: z.number(), columns: z.number().int(), rows: z.number().int(), cornersLonLat: cellsGrid.shape.cornersLonLat, cells: z.string() });
export type ReliefView = z.infer<typeof reliefView>;
