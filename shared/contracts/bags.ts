import { z } from 'zod';
import { LABEL_LETTERS, readLabelCode } from '../field/labelCode.ts';
import { id, isoTime, lonLat } from './common.ts';
import { refusalCode, refusalFacts } from './readings.ts';

/** A label as typed or scanned; what reaches the services is the bare code. */
export const labelCode = z.string().max(300).transform((text, context) => {
  const read = readLabelCode(text);
  if ('code' in read) return read.code;
  context.addIssue({ code: 'custom', message: labelProblem(read.problem, read.at) });
  return z.NEVER;
});

function labelProblem(problem: 'length' | 'letter' | 'check', at: string): string {
  if (problem === 'letter') return `"${at}" is on no label: labels carry only the letters ${LABEL_LETTERS}.`;
  if (problem === 'length') return `A label has six letters, not ${at.length}. Read it again.`;
  return `The letters ${at} do not fit each other. Read the label again.`;
}

export const bagVine = z.object({ rowId: id, ordinal: z.number().int().min(-10_000).max(100_000) });

/** A bag closed in the row. The id is made on the phone, so that sending it again can never double it. */
export const newBag = z.object({
  id,
  code: labelCode,
  /** `void`: a label that was spoilt or left over; its number is not used again. */
  state: z.enum(['closed', 'void']).default('closed'),
  roundId: id.nullable().default(null),
  blockId: id,
  zoneId: id.nullable().default(null),
  /** Vines whose fruit is in it: the zone of its results follows from them. */
  vines: z.array(bagVine).max(400).default([]),
  berries: z.number().int().min(0).max(100_000).nullable().default(null),
  sunSide: z.number().int().min(0).max(100_000).nullable().default(null),
  shadeSide: z.number().int().min(0).max(100_000).nullable().default(null),
  wet: z.boolean().nullable().default(null),
  rotPercent: z.number().min(0).max(100).nullable().default(null),
  closedAt: isoTime,
  deviceTime: isoTime.nullable().default(null),
  deviceId: z.string().max(80).nullable().default(null),
  note: z.string().max(600).default(''),
});
export type NewBag = z.infer<typeof newBag>;

export const bagBatch = z.object({ bags: z.array(z.unknown()).min(1).max(300) });

export const bagOutcome = z.object({
  id: z.string(),
  /** `received`: stored now or before. `conflict`: stored, but its label is on another bag too. `refused`: not stored, for the reason given. */
  state: z.enum(['received', 'conflict', 'refused']),
  reason: z.string().nullable(),
  code: refusalCode.optional(),
  /** What the phone's own words name, such as the row and its last vine. */
  facts: refusalFacts.optional(),
  /** Of a conflict: where the label was used first, for the phone's own words. */
  usedBy: z.object({ bagId: id, rowLabel: z.string().nullable(), vineNumber: z.number().int().nullable(), person: z.string().nullable(), closedAt: z.string().nullable() }).nullable(),
});
export type BagOutcome = z.infer<typeof bagOutcome>;
export const bagBatchAnswer = z.object({ outcomes: z.array(bagOutcome), serverTime: z.string() });
export type BagBatchAnswer = z.infer<typeof bagBatchAnswer>;

/** Where a bag stands on the receiving list. `extra`: on the bench, but nobody has sent what is in it. `clash`: its label is on two bags. */
export const bagPlace = z.enum(['expected', 'here', 'missing', 'extra', 'clash', 'void']);

export const bagLine = z.object({
  id,
  code: z.string(),
  place: bagPlace,
  roundId: id.nullable(),
  blockId: id.nullable(),
  blockName: z.string().nullable(),
  /** Number and name of the zone that most of its vines are in today. */
  zone: z.number().int().nullable(),
  zoneName: z.string().nullable(),
  vines: z.number().int(),
  /** First vine, as people in the block count it. */
  rowLabel: z.string().nullable(),
  vineNumber: z.number().int().nullable(),
  /** Where it stands, given where vines stand without rows. */
  vinePlace: lonLat.optional(),
  berries: z.number().int().nullable(),
  sunSide: z.number().int().nullable(),
  shadeSide: z.number().int().nullable(),
  wet: z.boolean().nullable(),
  rotPercent: z.number().nullable(),
  note: z.string(),
  /** Who closed it: the last person known to have held a bag that is missing. */
  holder: z.string().nullable(),
  closedAt: z.string().nullable(),
  receivedAt: z.string().nullable(),
  receivedBy: z.string().nullable(),
  missingAt: z.string().nullable(),
  swappedAt: z.string().nullable(),
  clashesWith: id.nullable(),
  results: z.number().int(),
});
export type BagLine = z.infer<typeof bagLine>;

/** A label that two bags carry, until somebody settles it. */
export const bagClash = z.object({ first: bagLine, later: bagLine, maySettle: z.boolean() });
export type BagClash = z.infer<typeof bagClash>;

export const bagList = z.object({ items: z.array(bagLine), total: z.number().int() });
export const bagQuery = z.object({ round: id.optional(), days: z.coerce.number().int().min(1).max(400).optional() });

/** The lab scans or types what lies on the bench. */
export const bagReceipt = z.object({ codes: z.array(labelCode).min(1).max(300) });
export const bagReceiptAnswer = z.object({ outcomes: z.array(z.object({ code: z.string(), state: z.enum(['here', 'hereBefore', 'extra']) })) });
const bagIds = z.array(id).min(1).max(600);
/** The bags named are not here. `ifExpected`: only those that nobody has taken in meanwhile, as for "that was all". */
export const bagsMissing = z.object({ bagIds, ifExpected: z.boolean().default(false) });
export type BagsMissing = z.infer<typeof bagsMissing>;
/** Bags that were called missing and are on their way again. */
export const bagsExpected = z.object({ bagIds });
/** The bags that a request changed. */
export const bagsChanged = z.object({ bagIds: z.array(id) });
const reason = z.string().trim().min(3, 'Say why, in a few words.').max(300);
/** The labels of two bags were exchanged, or a bag got another label: they change places in one step. */
export const bagSwap = z.object({ codes: z.tuple([labelCode, labelCode]), reason }).refine(({ codes }) => codes[0] !== codes[1], { message: 'Name two different labels.', path: ['codes'] });
export const clashChoice = z.object({
  /** `same`: one bag, closed twice. `keepFirst`, `keepLater`: only that one is real, the other closing is void. `relabel`: two bags; the later one carries the new label. */
  choice: z.enum(['same', 'keepFirst', 'keepLater', 'relabel']),
  newCode: labelCode.nullable().default(null),
  reason,
});
export type ClashChoice = z.infer<typeof clashChoice>;

/** A label that was on two bags, and what somebody said of it. */
export const settledBagClash = z.object({ bagId: id, code: z.string(), choice: clashChoice.shape.choice, reason: z.string(), settledBy: z.string().nullable(), settledAt: z.string(), mayReopen: z.boolean() });
export type SettledBagClash = z.infer<typeof settledBagClash>;
