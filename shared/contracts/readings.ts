import { z } from 'zod';
import { id, isoTime } from './common.ts';
import { vineState } from './rows.ts';

/** One recorded value. The id is made where it is typed, so that sending it again can never double it. */
export const newReading = z
  .object({
    id,
    blockId: id,
    roundId: id.nullable().default(null),
    targetId: id.nullable().default(null),
    rowId: id.nullable().default(null),
    ordinal: z.number().int().min(-10_000).max(100_000).nullable().default(null),
    bagId: id.nullable().default(null),
    measureCode: z.string().min(1).max(40),
    value: z.number(),
    unit: z.string().max(20),
    valueTyped: z.string().max(40).nullable().default(null),
    unitTyped: z.string().max(20).nullable().default(null),
    samples: z.number().int().min(1).max(10_000).default(1),
    takenAt: isoTime,
    /** The device's own clock when it sent the batch; tells a wrong clock. */
    deviceTime: isoTime.nullable().default(null),
    deviceId: z.string().max(80).nullable().default(null),
    source: z.enum(['field', 'lab', 'paper', 'import']).default('field'),
    supersedes: id.nullable().default(null),
    flags: z.array(z.enum(['odd', 'reserve', 'wetFruit', 'belowDetection', 'repeat'])).max(8).default([]),
    note: z.string().max(600).default(''),
    /** Who read it, when somebody else types it from paper. */
    readBy: id.nullable().default(null),
    /** Row and vine as they were shown where it was read: tells a renumbering that happened meanwhile. */
    seenAs: z.object({ row: z.string().max(20), vine: z.number().int() }).nullable().default(null),
  })
  .refine((reading) => reading.bagId !== null || (reading.rowId !== null && reading.ordinal !== null), { message: 'A reading needs its vine (row and number) or its bag.', path: ['rowId'] });
export type NewReading = z.infer<typeof newReading>;

/** What a person found instead of a bearing vine: a proposal for the census. */
export const vineFinding = z.object({
  id,
  blockId: id,
  rowId: id,
  ordinal: z.number().int().min(-10_000).max(100_000),
  state: vineState,
  roundId: id.nullable().default(null),
  notedAt: isoTime,
  deviceId: z.string().max(80).nullable().default(null),
  readBy: id.nullable().default(null),
});
export type VineFinding = z.infer<typeof vineFinding>;

export const readingBatch = z.object({ readings: z.array(z.unknown()).max(1000).default([]), findings: z.array(z.unknown()).max(500).default([]) });

/** Why something that came from a phone was not stored: phones have the words in five languages. */
export const refusalCode = z.enum(['blockElsewhere', 'noSuchMeasure', 'otherUnit', 'rowElsewhere', 'notYourRound', 'needsRound', 'readerUnknown', 'bagElsewhere', 'correctsUnknown', 'noSeason', 'otherContent', 'noSuchVine']);
/** What the words of a code name: a row, its vines. */
export const refusalFacts = z.record(z.string(), z.union([z.string(), z.number()]));
export interface Refusal {
  readonly code: z.infer<typeof refusalCode>;
  readonly reason: string;
  readonly facts?: Readonly<z.infer<typeof refusalFacts>>;
}

export const readingOutcome = z.object({
  id: z.string(),
  /** `received`: stored now or before; with a reason when a line of paper repeats what the phone had sent. `refused`: not stored, for the reason given. `conflict`: stored beside another reading of the same vine. */
  state: z.enum(['received', 'conflict', 'refused']),
  reason: z.string().nullable(),
  code: refusalCode.optional(),
  facts: refusalFacts.optional(),
});
export type ReadingOutcome = z.infer<typeof readingOutcome>;

export const batchAnswer = z.object({ outcomes: z.array(readingOutcome), findings: z.array(readingOutcome), serverTime: z.string() });
export type BatchAnswer = z.infer<typeof batchAnswer>;

export const readingView = z.object({
  id,
  blockId: id.nullable(),
  rowId: id.nullable(),
  rowLabel: z.string().nullable(),
  ordinal: z.number().nullable(),
  position: z.tuple([z.number(), z.number()]).nullable(),
  roundId: id.nullable(),
  measureCode: z.string(),
  value: z.number(),
  unit: z.string(),
  samples: z.number(),
  takenAt: z.string(),
  receivedAt: z.string(),
  person: z.string().nullable(),
  source: z.string(),
  state: z.enum(['provisional', 'checked', 'final']),
  excludedReason: z.string().nullable(),
  flags: z.array(z.string()),
  note: z.string(),
});
export type ReadingView = z.infer<typeof readingView>;

export const readingQuery = z.object({
  block: id.optional(),
  round: id.optional(),
  measure: z.string().optional(),
  season: id.optional(),
  /** Key of the last line of the page before. */
  after: z.string().max(80).optional(),
});

export const readingExclusion = z.object({ reason: z.string().trim().min(3, 'Say why this reading is left out.').max(300).nullable() });
