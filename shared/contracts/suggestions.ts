import { z } from 'zod';
import { id, isoDate, shortName } from './common.ts';

const wine = z.enum(['red', 'white', 'rose']);
const range = z.object({ low: z.number().nullable().default(null), high: z.number().nullable().default(null) }).refine(({ low, high }) => low === null || high === null || low <= high, { message: 'The lower end of a target is above its upper end.' });

/** What lots are to be proposed from. Nothing is applied: the answer is a what-if. */
export const newSuggestion = z.object({
  name: shortName,
  /** True: drafts of the lots in force are left aside and their zones placed anew. Confirmed lots always stay. */
  startOver: z.boolean().default(false),
  /** Tanks to fill; null for all that are empty. */
  tankIds: z.array(id).max(200).nullable().default(null),
  /** Varieties that may go together. */
  together: z.array(z.array(z.string().max(80)).min(2).max(20)).max(20).default([]),
  /** Wine of each variety; those not named become red. */
  wines: z.record(z.string().max(80), wine).default({}),
  targets: z.object({ brix: range, ph: range, ta: range }).partial().default({}),
  leastChance: z.number().min(0.5).max(0.99).default(0.8),
  firstDay: isoDate,
  days: z.number().int().min(1).max(60).default(14),
});
export type NewSuggestion = z.infer<typeof newSuggestion>;

const measure = z.enum(['brix', 'ph', 'ta']);

const overLimit = z.object({ code: z.enum(['overDay', 'overPress']), tonnes: z.number(), limit: z.number() });
const tooBig = z.object({ code: z.literal('tooBig'), litres: z.number(), limit: z.number(), chance: z.number() });
const againstReason = z.discriminatedUnion('code', [overLimit, tooBig, z.object({ code: z.literal('leavesLot'), measure, value: z.number() })]);
export type AgainstReasonView = z.infer<typeof againstReason>;
const placedReason = z.object({
  code: z.enum(['alone', 'alike']),
  distance: z.number().nullable(),
  /** Missing in proposals made before it was kept. */
  nearest: z.object({ lotName: z.string(), distance: z.number(), against: againstReason.nullable() }).nullable().optional(),
});
const leftOutReason = z.discriminatedUnion('code', [
  overLimit,
  z.object({ code: z.literal('notRead'), measure }),
  z.object({ code: z.literal('outsideTarget'), measure, value: z.number() }),
  tooBig,
  z.object({ code: z.literal('noTankLeft') }),
]);

/** The proposal as it was made, with the reason for every placing. */
export const suggestionView = z.object({
  asked: newSuggestion,
  madeOn: z.string(),
  provedBest: z.boolean(),
  /** Groupings that fit a tank, a day and the targets. */
  groupings: z.number().int(),
  /** False when nobody had entered what a day takes in, so that the days given rest on restrictions alone. */
  roomKnown: z.boolean().optional(),
  lots: z.array(z.object({ lotName: z.string(), tank: z.string(), chanceOfFit: z.number(), pickOn: z.string().nullable(), zones: z.array(z.object({ zoneId: id, zone: z.string(), reason: placedReason })) })),
  leftOut: z.array(z.object({ zoneId: id, zone: z.string(), reason: leftOutReason })),
});
export type SuggestionView = z.infer<typeof suggestionView>;
