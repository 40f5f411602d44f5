import { z } from 'zod';
import { id, isoDate, isoTime } from './common.ts';

const block = { blockId: id, blockName: z.string() };

/** One thing that waits for the person, as facts; the browser makes the sentence and the link. */
export const todayLine = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('restriction'), id, ...block, product: z.string(), startsAt: isoTime, endsAt: isoTime, state: z.enum(['comes', 'inForce', 'endsSoon', 'lifted']), /** Of one lifted before its time, in the last day. */ lifted: z.object({ at: isoTime, by: z.string(), reason: z.string() }).nullable() }),
  z.object({ kind: z.literal('notice'), id, number: z.int(), lotName: z.string(), pickOn: isoDate.nullable() }),
  z.object({ kind: z.literal('round'), id, planId: id, ...block, onDate: isoDate, done: z.int(), vines: z.int(), state: z.enum(['late', 'today', 'open', 'ahead']), isMine: z.boolean(), seen: z.boolean() }),
  z.object({ kind: z.literal('conflict'), total: z.int() }),
  z.object({ kind: z.literal('labelTwice'), total: z.int() }),
  z.object({ kind: z.literal('question'), id, fileName: z.string() }),
  z.object({ kind: z.literal('proposal'), id, ...block, number: z.int(), advisedZones: z.int().nullable() }),
  z.object({ kind: z.literal('draft'), id, ...block, number: z.int(), zones: z.int().nullable() }),
  z.object({ kind: z.literal('lacking'), id, ...block, zones: z.array(z.object({ number: z.int(), name: z.string(), read: z.int(), wanted: z.int() })) }),
  z.object({ kind: z.literal('marks'), ...block, vines: z.int() }),
  z.object({ kind: z.literal('provisional'), ...block, readings: z.int() }),
  z.object({ kind: z.literal('bags'), total: z.int() }),
  z.object({ kind: z.literal('lot'), id, name: z.string(), pickOn: isoDate, inDays: z.int(), confirmed: z.boolean() }),
  z.object({ kind: z.literal('mail'), failed: z.int() }),
  z.object({ kind: z.literal('backup'), lastAt: isoTime.nullable() }),
]);
export type TodayLine = z.infer<typeof todayLine>;
export type TodayOf<Kind extends TodayLine['kind']> = Extract<TodayLine, { kind: Kind }>;

/** What a new estate has of each, for the steps from nothing to a sampled block. */
export const setUp = z.object({ blocks: z.int(), layers: z.int(), zonings: z.int(), zoned: z.int(), plans: z.int(), people: z.int() });
export type SetUp = z.infer<typeof setUp>;

export const todayView = z.object({ day: isoDate, lines: z.array(todayLine), setUp });
export type TodayView = z.infer<typeof todayView>;
