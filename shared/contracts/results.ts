import { z } from 'zod';
import { id } from './common.ts';
import { brixMethods } from './lots.ts';
import { heatSum, visitConditions } from './weather.ts';

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
  /** All its figures were called final. */
  isFinal: z.boolean(),
  leftOut: z.number().int(),
});
export type ZoneResult = z.infer<typeof zoneResult>;

/** Zones that a plan sampled as one, on a visit of that plan: the mean that its margin was asked for. */
export const togetherResult = zoneResult.omit({ zone: true }).extend({ zones: z.array(z.number().int()) });
export type TogetherResult = z.infer<typeof togetherResult>;

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
  together: z.array(togetherResult),
  block: z.array(blockResult),
  /** Readings whose vine is in no zone of this zoning. */
  outside: z.number().int(),
});
export type ResultsView = z.infer<typeof resultsView>;

const changeWord = z.enum(['higher', 'lower', 'notDistinguishable']);

/** Change since the visit before: what the words on the screen come from. */
export const visitChange = z.object({
  from: z.string(),
  /** True when mostly the same vines were read on both days. */
  sameVines: z.boolean(),
  value: z.number(),
  halfWidth: z.number().nullable(),
  word: changeWord,
});
export type VisitChange = z.infer<typeof visitChange>;

const trendView = z.discriminatedUnion('kind', [
  z.object({
    kind: z.literal('trend'), visits: z.number().int(), firstDay: z.number(), lastDay: z.number(), intercept: z.number(), slope: z.number(), slopeStandardError: z.number(), slopeLower: z.number(), slopeUpper: z.number(),
    word: changeWord, df: z.number(), residualSd: z.number(), rSquared: z.number().nullable(), meanDay: z.number(), meanValue: z.number(), daySpread: z.number(), confidence: z.number(),
  }),
  z.object({ kind: z.literal('refused'), reason: z.enum(['fewVisits', 'oneDay', 'mixedProtocols']), visits: z.number().int(), needed: z.number().int() }),
]);

/** One zone and measure through the season; `day` counts from 1 January 1970. */
export const ripeningSeries = z.object({
  zone: z.number().int(),
  measure: z.string(),
  points: z.array(z.object({ visit: z.string(), day: z.number().int(), value: z.number(), halfWidth: z.number().nullable(), n: z.number().int(), /** Figures of it that nobody has checked. */ provisional: z.number().int(), isFinal: z.boolean() })),
  change: visitChange.nullable(),
  trend: trendView,
  /** A straight line runs ahead of fruit that slows down. */
  bend: z.enum(['slowing', 'quickening', 'notDistinguishable']).nullable(),
  /** Where the mean of one more visit would lie; empty while the trend is refused. */
  forecast: z.array(z.object({ day: z.number().int(), value: z.number(), lower: z.number(), upper: z.number() })),
  /** Visits that took their samples in another way than the newest: left out of the trend. */
  otherWay: z.number().int(),
  /** Spread between vines on the newest visit. */
  sd: z.number().nullable(),
});
export type RipeningSeries = z.infer<typeof ripeningSeries>;

export const ripeningView = resultsView.extend({
  /** Season of the readings; `zonesFrom` names the season whose zones they are read by where it had none, nothing is forecast once it is over. */
  season: z.object({ id, name: z.string(), startsOn: z.string(), endsOn: z.string(), isOver: z.boolean(), zonesFrom: z.string().nullable() }),
  /** All seasons, newest first, with the readings that this block has in each. */
  seasons: z.array(z.object({ id, name: z.string(), readings: z.int() })),
  series: z.array(ripeningSeries),
  /** How often the forecasts of this season beat "no change", and how often their band held, by measure. */
  record: z.array(z.object({ measure: z.string(), n: z.number().int(), better: z.number().int(), held: z.number().int(), few: z.boolean() })),
  /** What the estate set for itself on the day shown: what an hour costs, and its way to potential alcohol. */
  settings: z.object({ costPerHour: z.number(), currency: z.string(), alcoholMethod: z.enum(brixMethods) }),
  /** The day it is shown as of, or null for now. */
  knownOn: z.string().nullable(),
  /** First day from which changes of the vine census are kept, where that is after `knownOn`. */
  censusFrom: z.string().nullable(),
  /** Figures of the lab that nobody has checked: how many there are, and whether they count here. */
  unchecked: z.object({ basis: z.enum(['out', 'in']), n: z.number().int() }),
  /** Wet fruit, rain and heat beside each visit. */
  conditions: z.array(visitConditions),
  /** Heat above 10 °C of the season so far; null while no temperatures are kept. */
  heat: heatSum.nullable(),
  /** Sugar in a berry, zone by zone, where berries were weighed on two visits. */
  loading: z.array(z.object({ zone: z.number().int(), from: z.string(), to: z.string(), word: z.enum(['loading', 'concentration', 'dilution', 'losing', 'notDistinguishable']), confidence: z.number(), sugarMg: z.number(), sugarHalfWidth: z.number().nullable(), brix: z.number(), brixHalfWidth: z.number().nullable(), berryWeightG: z.number(), berryWeightHalfWidth: z.number().nullable() })),
});
export type RipeningView = z.infer<typeof ripeningView>;
