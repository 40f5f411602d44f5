import { z } from 'zod';
import { labelCode, bagLine } from './bags.ts';
import { id, isoDate } from './common.ts';

export const resultState = z.enum(['provisional', 'checked', 'final']);
export type ResultState = z.infer<typeof resultState>;

/** One figure typed at the bench. The id is made where it is typed, so that storing it again can never double it. */
export const newLabResult = z.object({
  id,
  code: labelCode,
  measureCode: z.string().min(1).max(40),
  /** As typed: "23,4" or "<0.1". */
  typed: z.string().trim().min(1).max(40),
  /** A unit of `shared/lab/units`; null for the measure's own. */
  unit: z.string().max(20).nullable().default(null),
  instrument: z.string().trim().max(80).default(''),
  method: z.string().trim().max(80).default(''),
  analysedOn: isoDate.nullable().default(null),
  /** The figure that this one corrects. */
  supersedes: id.nullable().default(null),
  /** Figures that stood in the cell when it was typed: one that came meanwhile is not passed over. Null where nobody looked. */
  seen: z.array(id).max(100).nullable().default(null),
  /** Needed to correct a figure that was checked. */
  reason: z.string().trim().max(300).default(''),
});
export type NewLabResult = z.infer<typeof newLabResult>;
export const labResultBatch = z.object({ results: z.array(z.unknown()).min(1).max(600) });
export const labOutcome = z.object({ id: z.string(), state: z.enum(['received', 'refused']), reason: z.string().nullable() });
export type LabOutcome = z.infer<typeof labOutcome>;

export const labResult = z.object({
  id,
  bagId: id,
  measureCode: z.string(),
  value: z.number(),
  below: z.boolean(),
  typed: z.string().nullable(),
  unitTyped: z.string().nullable(),
  instrument: z.string(),
  method: z.string(),
  analysedOn: z.string().nullable(),
  state: resultState,
  stateBy: z.string().nullable(),
  stateAt: z.string().nullable(),
  person: z.string().nullable(),
  receivedAt: z.string(),
  fileName: z.string().nullable(),
  corrected: z.boolean(),
  flags: z.array(z.string()),
  excludedReason: z.string().nullable(),
  exclusionProposal: z.object({ reason: z.string(), by: z.string().nullable(), at: z.string() }).nullable(),
});
export type LabResult = z.infer<typeof labResult>;

export const labMeasure = z.object({ code: z.string(), name: z.string(), unit: z.string(), decimals: z.number().int(), minimum: z.number(), maximum: z.number(), confidence: z.number(), inUse: z.boolean() });
export type LabMeasureView = z.infer<typeof labMeasure>;

const interval = z.object({ n: z.number().int(), mean: z.number(), halfWidth: z.number().nullable() });

/** Figures of one measure and zone on one day, judged against each other. */
export const labGroup = z.object({
  measure: z.string(),
  blockName: z.string().nullable(),
  zone: z.number().int().nullable(),
  zoneName: z.string().nullable(),
  day: z.string(),
  confidence: z.number(),
  resultIds: z.array(id),
  /** Far from the rest by the modified z-score. */
  outliers: z.array(id),
  /** Outside the measure's usual range. */
  outside: z.array(id),
  below: z.number().int(),
  /** With everything that is not left out, and without what is marked as well. */
  withAll: interval.nullable(),
  withoutMarked: interval.nullable(),
  /** With what somebody left out as well; null where nothing is. */
  withLeftOut: interval.nullable(),
});
export type LabGroup = z.infer<typeof labGroup>;

export const labBench = z.object({ measures: z.array(labMeasure), bags: z.array(bagLine), results: z.array(labResult), groups: z.array(labGroup) });
export type LabBench = z.infer<typeof labBench>;

export const stateChange = z.object({ resultIds: z.array(id).min(1).max(1000), state: resultState });
export const exclusionRequest = z.object({ reason: z.string().trim().min(3, 'Say why, in a few words.').max(300).nullable() });

const params = z.record(z.string(), z.union([z.string(), z.number()]));
export const labFileQuestion = z.object({
  key: z.string(), code: z.string(), params, answer: z.string().nullable(), suggestion: z.string().nullable(),
  choices: z.array(z.object({ value: z.string(), label: z.string().nullable() })),
});
export const labFileEntry = z.object({
  line: z.number().int(),
  code: z.string(),
  measure: z.string(),
  value: z.number(),
  below: z.boolean(),
  typed: z.string(),
  unitTyped: z.string(),
  analysedOn: z.string().nullable(),
  odd: z.boolean(),
  corrected: z.boolean(),
});
export const labFileView = z.object({
  id,
  fileName: z.string(),
  labName: z.string(),
  state: z.enum(['asks', 'stored', 'dismissed']),
  sentAt: z.string(),
  sentBy: z.string().nullable(),
  storedAt: z.string().nullable(),
  storedCount: z.number().int().nullable(),
  words: z.array(z.object({ code: z.string(), params })),
  questions: z.array(labFileQuestion),
  entries: z.array(labFileEntry),
  /** Laboratory whose earlier file had the same columns: its answers were taken over. */
  rememberedFrom: z.string().nullable(),
  /** Checked figures that it corrects, as it is answered now: they change only with a reason. */
  changesChecked: z.number().int(),
});
export type LabFileView = z.infer<typeof labFileView>;
export const labFileAnswers = z.object({ answers: z.record(z.string().max(300), z.string().max(120)) });
export const labFileStore = z.object({
  labName: z.string().trim().min(1, 'Name the laboratory, so that its next file is read the same way.').max(80),
  instrument: z.string().trim().max(80).default(''),
  method: z.string().trim().max(80).default(''),
  /** Why checked figures change, for all that the file corrects. */
  reason: z.string().trim().max(300).default(''),
});
export type LabFileFacts = z.infer<typeof labFileStore>;
