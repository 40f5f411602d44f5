import { z } from 'zod';
import { id, isoDate, lonLat } from './common.ts';
import { rowSide } from './measures.ts';
import { vineWords } from './plans.ts';
import { dayQuestion } from './planWalks.ts';
import { postColour } from './blocks.ts';
import { restrictionView } from './restrictions.ts';
import { vineState } from './rows.ts';

export const newRound = z.object({
  onDate: isoDate,
  people: z.array(id).min(1, 'Choose who walks.').max(20).refine((people) => new Set(people).size === people.length, 'Each person once.'),
  gate: z.string().trim().max(120).default(''),
  /** Where the walk begins, as longitude and latitude; the block's own gate when null. */
  gateAt: lonLat.nullable().default(null),
  /** Back to the gate, or over at the last vine. */
  end: z.enum(['gate', 'anywhere']).default('gate'),
  notes: z.string().trim().max(1000).default(''),
});
export type NewRound = z.infer<typeof newRound>;

/** Plans of several blocks sent to the same people as one day. */
export const newDay = dayQuestion.extend(newRound.pick({ onDate: true, people: true, end: true, notes: true }).shape);
export type NewDay = z.infer<typeof newDay>;

/** A block of somebody's day. */
export const dayStop = z.object({
  roundId: id,
  block: z.string(),
  gate: z.string(),
  vines: z.number().int(),
  /** Place in a day that was sent as one; null for a round sent by itself. */
  place: z.number().int().nullable(),
  /** From the block before. */
  wayS: z.number().nullable(),
  /** Walking and sampling. */
  workS: z.number(),
});
export type DayStop = z.infer<typeof dayStop>;

export const roundState = z.enum(['sent', 'open', 'closed', 'called off']);
export const roundChange = z.object({
  state: z.enum(['open', 'closed', 'called off']),
  /** When the phone began; the server's clock otherwise. */
  startedAt: z.iso.datetime({ offset: true }).optional(),
  /** Closed for everybody, not one's own part only. */
  whole: z.boolean().optional(),
});

export const roundPerson = z.object({ id, name: z.string(), vines: z.number().int(), seconds: z.number(), acknowledgedAt: z.string().nullable(), /** When they were done with their part. */ finishedAt: z.string().nullable() });

export const roundSummary = z.object({
  id,
  planId: id,
  planName: z.string(),
  blockId: id,
  blockName: z.string(),
  onDate: z.string(),
  state: roundState,
  /** Place in a day over several blocks. */
  dayPlace: z.number().int().nullable(),
  gate: z.string(),
  notes: z.string(),
  people: z.array(roundPerson),
  vines: z.number().int(),
  /** Vines with at least one reading. */
  done: z.number().int(),
  measures: z.array(z.string()),
  isMine: z.boolean(),
});
export type RoundSummary = z.infer<typeof roundSummary>;

/** One stop of a person's walk. Everything spoken of by number is as people in the block count it. */
export const walkStop = z.object({
  targetId: id,
  number: z.number().int(),
  ...vineWords.shape,
  rowLabelWas: z.string().nullable(),
  zone: z.number().int(),
  drawOrder: z.number().int(),
  enterBy: z.enum(['start', 'end', 'gap', 'inside']),
  heading: z.enum(['toEnd', 'toStart']),
  ahead: z.number().int(),
  aheadFrom: z.enum(['entry', 'lastVine']),
  opensZone: z.boolean(),
  measures: z.array(z.string()),
  reserve: vineWords.nullable(),
  /** Something of this target has been read at its reserve, so that the rest is read there too. */
  atReserve: z.boolean().optional(),
});
export type WalkStop = z.infer<typeof walkStop>;

export const fieldRow = z.object({
  id,
  label: z.string(),
  firstOrdinal: z.number().int(),
  vineCount: z.number().int(),
  runs: z.array(z.object({ zone: z.number().int(), from: z.number().int(), to: z.number().int() })),
  known: z.array(z.object({ ordinal: z.number().int(), state: vineState })),
  /** Where first and last vine stand, for a rough place along the row. */
  ends: z.tuple([lonLat, lonLat]).nullable().default(null),
});
export type FieldRow = z.infer<typeof fieldRow>;

export const fieldMeasure = z.object({
  code: z.string(),
  name: z.string(),
  unit: z.string(),
  decimals: z.number().int(),
  minimum: z.number(),
  maximum: z.number(),
  margin: z.number(),
  marginKind: z.enum(['absolute', 'relative']),
  confidence: z.number(),
  skewed: z.boolean(),
  measuredIn: z.enum(['field', 'lab']),
  /** Face of the row from which it is taken; left out: either. */
  rowSide: rowSide.optional(),
  /** Clusters to take of a vine, and berries of each, where the plan says so. */
  handful: z.object({ perVine: z.number().int(), perCluster: z.number().int().nullable() }).nullable().optional(),
});
export type FieldMeasure = z.infer<typeof fieldMeasure>;

/** A value of the reader's own that the server has already, for "enough here" after a change of phone. */
export const fieldReading = z.object({ id, targetId: id.nullable(), measureCode: z.string(), value: z.number(), zone: z.number().int() });

/** A day's work as it is kept on the phone: nothing else is needed until evening. */
export const fieldRound = z.object({
  id,
  planId: id,
  planName: z.string(),
  blockId: id,
  blockName: z.string(),
  estateName: z.string(),
  onDate: z.string(),
  state: roundState,
  gate: z.string(),
  notes: z.string(),
  startPostColour: postColour,
  endPostColour: postColour,
  vineOneEnd: z.enum(['start', 'end']),
  people: z.array(z.object({ id, name: z.string(), vines: z.number().int() })),
  zones: z.array(z.object({ number: z.number().int(), name: z.string(), colour: z.string().nullable(), vines: z.number().int(), targets: z.number().int() })),
  measures: z.array(fieldMeasure),
  rows: z.array(fieldRow),
  stops: z.array(walkStop),
  /** Walks of the others, so that a phone without signal can take one over. */
  others: z.array(z.object({ id, name: z.string(), stops: z.array(walkStop) })).default([]),
  received: z.array(fieldReading),
  /** Vines that somebody has read already, whoever it was. */
  doneTargetIds: z.array(id),
  /** What of them was read, without the values; absent in a round that was kept before this was told. */
  readAsks: z.array(z.object({ targetId: id, measureCode: z.string() })).optional(),
  safety: z.object({ emergencyNumber: z.string(), meetingPoint: z.string() }),
  restrictions: z.array(restrictionView),
  /** Who may lift a restriction before its time. */
  lifters: z.array(z.string()).default([]),
  /** When the server looked for restrictions. */
  checkedAt: z.string(),
  /** The reader's blocks of that day, in their order. */
  day: z.array(dayStop).default([]),
  acknowledgedAt: z.string().nullable(),
});
export type FieldRound = z.infer<typeof fieldRound>;
