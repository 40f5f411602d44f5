import { z } from 'zod';
import { id, lonLat } from './common.ts';
import { labFileQuestion } from './lab.ts';

const params = z.record(z.string(), z.union([z.string(), z.number()]));

export const earlierExample = z.object({
  line: z.int(),
  blockName: z.string(),
  rowLabel: z.string(),
  vineNumber: z.int(),
  place: lonLat.optional(),
  metres: z.number().nullable(),
  day: z.string(),
  measure: z.string(),
  value: z.number(),
  typed: z.string(),
  unitTyped: z.string(),
  odd: z.boolean(),
});

/** What would be stored of a table, or was. */
export const earlierSummary = z.object({
  lines: z.int(),
  readings: z.int(),
  /** Readings that the estate has already, from another table or the field: not stored again. */
  known: z.int(),
  blocks: z.array(z.object({ id, name: z.string(), vines: z.int(), readings: z.int() })),
  days: z.object({ count: z.int(), first: z.string(), last: z.string() }).nullable(),
  measures: z.array(z.object({ code: z.string(), count: z.int(), mean: z.number(), least: z.number(), most: z.number(), odd: z.int() })),
  /** Seasons that hold the days; `isNew` are made when the table is stored. */
  seasons: z.array(z.object({ name: z.string(), isNew: z.boolean(), readings: z.int() })),
  refusedLines: z.int(),
  examples: z.array(earlierExample),
});
export type EarlierSummary = z.infer<typeof earlierSummary>;

export const earlierFileView = z.object({
  id,
  fileName: z.string(),
  state: z.enum(['asks', 'stored', 'dismissed', 'takenBack']),
  sentAt: z.string(),
  sentBy: z.string().nullable(),
  storedAt: z.string().nullable(),
  takenBackAt: z.string().nullable(),
  takenBackBy: z.string().nullable(),
  takenBackReason: z.string().nullable(),
  words: z.array(z.object({ code: z.string(), params })),
  questions: z.array(labFileQuestion),
  /** The first of the lines and cells that cannot be used, each with its reason. */
  refused: z.array(z.object({ line: z.int(), code: z.string(), params })),
  refusedCount: z.int(),
  summary: earlierSummary.nullable(),
  /** A table with the same columns was stored before: its answers were taken over. */
  isRemembered: z.boolean(),
});
export type EarlierFileView = z.infer<typeof earlierFileView>;

/** `leaveOut` says how many lines and cells will not be stored: a table with such lines is stored only when they are named. */
export const earlierStore = z.object({ leaveOut: z.int().min(0).default(0) });
export const earlierTakeBack = z.object({ reason: z.string().trim().min(3, 'Say why these readings are taken back.').max(300) });
