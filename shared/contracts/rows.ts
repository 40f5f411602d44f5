import { z } from 'zod';
import { id } from './common.ts';

const lonLat = z.tuple([z.number(), z.number()]);

/** One unbroken piece of a row between two headlands, from the start end to the other. */
export const rowPiece = z.object({
  from: lonLat,
  to: lonLat,
  /** Corners between the ends of a surveyed row that bends. */
  bends: z.array(lonLat),
  lengthM: z.number().positive(),
  /** Ordinal of the first vine of the piece; 1 or, on a row lengthened at its start end, less. */
  firstVine: z.number().int(),
  vineCount: z.number().int().min(0),
  /** Distance from the start of the piece to its first vine, and between vines, in metres. */
  firstVineM: z.number().min(0),
  stepM: z.number().min(0),
});
export type RowPiece = z.infer<typeof rowPiece>;

export const vineStates = ['missing', 'dead', 'replant', 'offType', 'sick'] as const;
export const vineState = z.enum(vineStates);
export type VineState = z.infer<typeof vineState>;

/** Known vines that are not plain living ones; `proposed` by crew until somebody takes it over, with who found it and when for whoever may. */
export const knownVine = z.object({ ordinal: z.number().int(), state: vineState, proposed: z.boolean(), noted: z.object({ by: z.string(), at: z.string() }).optional() });
export type KnownVine = z.infer<typeof knownVine>;

export const blockRow = z.object({
  id,
  ordinal: z.number().int(),
  label: z.string(),
  /** Label before the last renumbering; sheets print "14 (was 12)". */
  labelWas: z.string().nullable(),
  vineCount: z.number().int(),
  pieces: z.array(rowPiece),
  vines: z.array(knownVine),
});
export type BlockRowView = z.infer<typeof blockRow>;

export const rowOneSide = z.enum(['low', 'high']);
export const vineOneEnd = z.enum(['start', 'end']);

/** Where people begin to count: sides of the row frame, and the number on the first row. */
export const numbering = z.object({ rowOneSide, vineOneEnd, firstRowLabel: z.number().int().min(0).max(100_000) });
export type Numbering = z.infer<typeof numbering>;

/** New numbers: by sides, or by a tap near one of the four outermost row ends. */
export const numberingChange = z
  .object({ rowOneSide: rowOneSide.optional(), vineOneEnd: vineOneEnd.optional(), firstRowLabel: z.number().int().min(0).max(100_000).optional(), corner: lonLat.optional() })
  .refine((change) => Object.values(change).some((value) => value !== undefined), 'Say from which corner to count, or the first number.');
export type NumberingChange = z.infer<typeof numberingChange>;

/** How well the vines of a block are known: nobody counted, some places were marked, or every place was looked at. */
export const census = z.enum(['unknown', 'partial', 'full']);
export type Census = z.infer<typeof census>;

/** Places for vines and what stands in them; a place nobody marked counts as living. */
export const vineCounts = z.object({
  places: z.number().int(),
  living: z.number().int(),
  missing: z.number().int(),
  dead: z.number().int(),
  replant: z.number().int(),
  offType: z.number().int(),
  sick: z.number().int(),
  proposed: z.number().int(),
  census,
});
export type VineCounts = z.infer<typeof vineCounts>;

export const blockRows = z.object({
  items: z.array(blockRow),
  total: z.number().int(),
  numbering,
  counts: vineCounts,
  /** Of the block these rows belong to; sent back as If-Match when numbers change. */
  version: z.number().int(),
});
export type BlockRowsView = z.infer<typeof blockRows>;

/** `living` takes a mark away again. */
export const censusMark = z.object({ rowId: id, ordinal: z.number().int().min(-10_000).max(100_000), state: z.enum([...vineStates, 'living']) });
export type CensusMark = z.infer<typeof censusMark>;

/** A count of vines, as marks by permanent row and ordinal or as a pasted table of row number, vine number and state. */
export const censusChange = z
  .object({
    marks: z.array(censusMark).max(200_000).optional(),
    table: z.string().max(5_000_000).optional(),
    /** True when every place was looked at: places not named are living. */
    complete: z.boolean().default(false),
  })
  .refine((change) => (change.marks === undefined) !== (change.table === undefined), 'Send either marks or a table.');
export type CensusChange = z.infer<typeof censusChange>;

export const censusOutcome = z.object({
  counts: vineCounts,
  changed: z.int(),
  skipped: z.int().describe("Marks that crew proposed where somebody's mark already stands."),
});
export type CensusOutcome = z.infer<typeof censusOutcome>;
