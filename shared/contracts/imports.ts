import { z } from 'zod';
import { layerTypeIds } from '../catalog/layerTypes.ts';
import { areaGeometry, id, isoDate, shortName } from './common.ts';
import { setAsideReasons } from '../analysis/cleanPoints.ts';
import { newBlock } from './blocks.ts';

const lonLat = z.tuple([z.number(), z.number()]);

export const importStates = ['reading', 'asks', 'ready', 'done', 'refused'] as const;

/** What a file is used for. `soil` becomes a layer of numbers or of classes, as the next answer says. */
export const importPurposes = ['boundary', 'rows', 'vigour', 'conductivity', 'yield', 'soil', 'elevation'] as const;
export type ImportPurpose = (typeof importPurposes)[number];

/** Growth stages that change what a vigour picture tells. */
export const growthStages = ['budburst', 'flowering', 'fruitSet', 'veraison', 'ripe', 'leafFall', 'unknown'] as const;

/** Answers by question. `null` is an answer too: not known, or none. A question that is left out stays open. */
export const importAnswers = z.object({
  purpose: z.enum(importPurposes).optional(),
  /** EPSG code of the file's coordinates. */
  reference: z.number().int().optional(),
  /** Or the text of a .prj file. */
  projectionText: z.string().max(10_000).optional(),
  /** The place is right although it is far away ("keep"), or the EPSG code that brings it near. */
  placement: z.string().regex(/^(keep|\d{4,6})$/).optional(),
  /** Number that marks missing values; null when every value counts. */
  noData: z.number().nullable().optional(),
  /** The last band says where nothing was measured. */
  maskBand: z.boolean().optional(),
  /** Which of several layers in the file. */
  sourceLayer: z.string().max(300).optional(),
  xColumn: z.string().max(300).optional(),
  yColumn: z.string().max(300).optional(),
  swapAxes: z.boolean().optional(),
  decimalMark: z.enum(['.', ',']).optional(),
  /** What the values of a picture are: one band as it is, or an index made of bands. */
  value: z.enum(['band', 'ndvi', 'gndvi', 'ndre', 'ratio', 'savi', 'osavi', 'msavi2']).optional(),
  band: z.number().int().min(1).optional(),
  nirBand: z.number().int().min(1).optional(),
  redBand: z.number().int().min(1).optional(),
  greenBand: z.number().int().min(1).optional(),
  redEdgeBand: z.number().int().min(1).optional(),
  /** Which index a single band of vigour holds already. */
  holds: z.enum(['ndvi', 'gndvi', 'ndre', 'ratio', 'savi', 'osavi', 'msavi2', 'other']).optional(),
  /** Field of a shape or column of a table that holds the value. */
  attribute: z.string().max(300).optional(),
  soilAs: z.enum(['number', 'classes']).optional(),
  unit: z.string().max(20).optional(),
  /** Day it was taken; null when nobody knows. */
  capturedOn: isoDate.nullable().optional(),
  /** State of the alleys when a vigour picture was taken. */
  alleys: z.enum(['bare', 'mown', 'green', 'unknown']).optional(),
  /** Growth stage of the vines when a vigour picture was taken. */
  growthStage: z.enum(growthStages).optional(),
  /** Which pixels of a fine vigour picture count: all, those that the index tells to be canopy, or strips along the rows. */
  canopy: z.enum(['all', 'threshold', 'rows']).optional(),
  /** Conductivity measured between rows with steel wires and posts. */
  steelTrellis: z.enum(['yes', 'no', 'unknown']).optional(),
  /** Field that names the outlines of a boundary file; null when none does. */
  nameField: z.string().max(300).nullable().optional(),
  /** Field with the labels of rows; null when none has them. */
  rowLabelField: z.string().max(300).nullable().optional(),
  /** Reasons for setting readings aside that a person took back. */
  takenBack: z.array(z.enum(setAsideReasons)).max(setAsideReasons.length).optional(),
  layerName: shortName.optional(),
});
export type ImportAnswers = z.infer<typeof importAnswers>;
export type ImportQuestionCode = keyof ImportAnswers;

export const importPatch = z.object({ answers: importAnswers });

/** Files that were sent in pieces and have arrived whole; those that belong together are named together. */
export const arrivedUploads = z.object({ uploads: z.array(z.string().regex(/^[0-9a-f.-]{110}$/, 'This is no upload.')).min(1).max(40) });

export const questionChoice = z.object({
  value: z.union([z.string(), z.number(), z.boolean(), z.null()]),
  /** As the file or the reference system names it; null when the screen has words for the value. */
  label: z.string().nullable(),
  outlineLonLat: z.array(lonLat).nullable(),
  /** Some positions of the file as this answer would place them; pictures have none. */
  sampleLonLat: z.array(lonLat).optional(),
  distanceKm: z.number().nullable(),
  /** Metres by which it may lie aside, where the choice is a reference system on a datum that is not today's. */
  uncertaintyM: z.number().optional(),
});
export type QuestionChoice = z.infer<typeof questionChoice>;

export const importQuestion = z.object({
  code: z.string(),
  kind: z.enum(['choice', 'date', 'text']),
  /** Why it is asked, where the file gives the reason; else null. */
  reason: z.string().nullable(),
  /** The same as a code with its values, for which the screen has words. */
  why: z.object({ code: z.string(), params: z.record(z.string(), z.union([z.string(), z.number()])) }).optional(),
  choices: z.array(questionChoice),
  /** What the file itself suggests; shown, never taken without a person's answer. */
  suggestion: questionChoice.shape.value,
  answer: questionChoice.shape.value,
  answered: z.boolean(),
});
export type ImportQuestion = z.infer<typeof importQuestion>;

export const importNote = z.object({ code: z.string(), text: z.string(), params: z.record(z.string(), z.union([z.string(), z.number()])) });
export type ImportNote = z.infer<typeof importNote>;

const field = z.object({ name: z.string(), kind: z.string(), examples: z.array(z.string()), distinct: z.number(), missing: z.number() });
export type FieldSummary = z.infer<typeof field>;

const placed = { reference: z.string().nullable(), epsg: z.number().nullable(), outlineLonLat: z.array(lonLat).nullable(), sampleLonLat: z.array(lonLat).optional() };

/** What a reader made of a file, without its contents. */
export const understoodFile = z.discriminatedUnion('kind', [
  z.object({
    kind: z.literal('raster'),
    ...placed,
    width: z.number(),
    height: z.number(),
    pixelSizeM: z.number().nullable(),
    compression: z.string(),
    bands: z.array(z.object({ index: z.number(), type: z.string(), description: z.string().nullable(), colour: z.string().nullable(), noData: z.number().nullable() })),
    verticalUnit: z.string().nullable(),
    captured: z.string().nullable(),
  }),
  z.object({ kind: z.literal('vector'), ...placed, layers: z.array(z.object({ name: z.string(), geometryKinds: z.array(z.string()), count: z.number(), fields: z.array(field) })) }),
  z.object({ kind: z.literal('points'), ...placed, count: z.number(), columns: z.array(field), position: z.object({ first: z.string(), second: z.string() }).nullable(), setAside: z.array(z.object({ reason: z.string(), count: z.number() })) }),
]);
export type UnderstoodFile = z.infer<typeof understoodFile>;

/** An outline of a boundary file, offered as a block. */
export const offeredOutline = z.object({
  index: z.number().int(),
  name: z.string(),
  areaHa: z.number().nullable(),
  boundary: areaGeometry,
  mainDirectionDeg: z.number().nullable(),
  /** Why it cannot be a block as it is; null when it can. */
  problem: importNote.nullable(),
  place: lonLat.nullable(),
  repair: z.object({ boundary: areaGeometry, areaBeforeHa: z.number(), areaAfterHa: z.number() }).nullable(),
});
export type OfferedOutline = z.infer<typeof offeredOutline>;

export const importView = z.object({
  id,
  fileId: id.nullable(),
  fileName: z.string(),
  bytes: z.number().nullable(),
  sha256: z.string().nullable(),
  /** Files that came with it and are parts of it: of a shapefile, or beside a picture. */
  parts: z.array(z.object({ name: z.string(), bytes: z.number(), sha256: z.string() })),
  format: z.string(),
  state: z.enum(importStates),
  understood: understoodFile.nullable(),
  questions: z.array(importQuestion),
  notes: z.array(importNote),
  problem: importNote.nullable(),
  /** Blocks that the file's outline touches. */
  covers: z.array(z.object({ blockId: id, name: z.string(), share: z.number() })),
  outlines: z.array(offeredOutline),
  layers: z.array(z.object({ id, type: z.enum(layerTypeIds), name: z.string() })),
  jobId: id.nullable(),
  uploadedBy: z.string().nullable(),
  createdAt: z.string(),
});
export type ImportView = z.infer<typeof importView>;

/** Outlines that become blocks together, each with its name and what else is known of it. */
export const outlinesTaken = z.object({
  blocks: z
    .array(newBlock.omit({ boundary: true }).extend({ outline: z.number().int().min(0), repaired: z.boolean().default(false) }))
    .min(1, 'Choose at least one outline.')
    .max(500),
});
export type OutlinesTaken = z.infer<typeof outlinesTaken>;
export const outlinesMade = z.object({ items: z.array(z.object({ id, name: z.string(), boundary: areaGeometry })), total: z.int() });
