import { z } from 'zod';
import { id } from './common.ts';

/** A mean with the range that its readings give it. Half-width and sd are null where one reading cannot tell. */
export const measuredMean = z.object({
  n: z.number().int(),
  mean: z.number(),
  sd: z.number().nullable(),
  halfWidth: z.number().nullable(),
  standardError: z.number().nullable(),
  df: z.number().nullable(),
  confidence: z.number(),
});
export type MeasuredMean = z.infer<typeof measuredMean>;

export const zoneResult = measuredMean.extend({
  zone: z.number().int(),
  measure: z.string(),
  visit: z.string(),
  /** Half-width wanted, in the measure's unit. */
  margin: z.number(),
  enough: z.boolean(),
  /** Readings still missing to the margin if the spread stays; null while fewer than two say nothing of the spread. */
  more: z.number().int().nullable(),
  provisional: z.number().int(),
  leftOut: z.number().int(),
});
export type ZoneResult = z.infer<typeof zoneResult>;

export const blockResult = measuredMean.extend({ measure: z.string(), visit: z.string(), zonesWithout: z.array(z.number().int()) });
export type BlockResult = z.infer<typeof blockResult>;

export const resultsView = z.object({
  zoningId: id,
  blockId: id,
  blockName: z.string(),
  zoningNumber: z.number().int(),
  zones: z.array(z.object({ id, number: z.number().int(), name: z.string(), areaHa: z.number(), vines: z.number().int(), bearing: z.number().int() })),
  measures: z.array(z.object({ code: z.string(), name: z.string(), unit: z.string(), decimals: z.number().int(), marginKind: z.enum(['absolute', 'relative']), margin: z.number(), confidence: z.number(), secondsPerSample: z.number() })),
  /** One a day of readings, oldest first. */
  visits: z.array(z.object({ key: z.string(), on: z.string(), roundIds: z.array(z.string()), seasonId: id })),
  values: z.array(zoneResult),
  block: z.array(blockResult),
  /** Readings whose vine is in no zone of this zoning. */
  outside: z.number().int(),
});
export type ResultsView = z.infer<typeof resultsView>;
