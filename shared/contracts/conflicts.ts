import { z } from 'zod';
import { bagClash, settledBagClash } from './bags.ts';
import { id, lonLat } from './common.ts';

/**
 * What two records disagree about. `sameVine`: one vine and measure twice. `sameTarget`: a target and its reserve both read.
 * `oldZones`: read for zones that were replaced meanwhile. `renumbered`: row or vine was called otherwise when it was read.
 */
export const conflictKind = z.enum(['sameVine', 'sameTarget', 'oldZones', 'renumbered']);
export type ConflictKind = z.infer<typeof conflictKind>;

/**
 * `keepOne`: the others are left out. `repeat`: one vine read twice, the mean counts. `bothReal`: each counts for itself, as it stands.
 * `moved`: they belong to the vines that have these numbers today. `leaveOut`: none counts.
 */
export const conflictAnswer = z.enum(['keepOne', 'repeat', 'bothReal', 'moved', 'leaveOut']);
export type ConflictAnswer = z.infer<typeof conflictAnswer>;

/** Answers that make sense for a kind, in the order they are offered. Two vines are never one vine read twice. */
export const answersTo: Readonly<Record<ConflictKind, readonly ConflictAnswer[]>> = {
  sameVine: ['keepOne', 'repeat', 'bothReal'],
  sameTarget: ['keepOne', 'bothReal'],
  oldZones: ['bothReal', 'leaveOut'],
  renumbered: ['bothReal', 'moved', 'leaveOut'],
};

export const conflictReading = z.object({
  id,
  who: z.string().nullable(),
  typedBy: z.string().nullable(),
  isMine: z.boolean(),
  source: z.string(),
  takenAt: z.string(),
  receivedAt: z.string(),
  /** The phone's clock when it sent, where it was more than five minutes off. */
  wrongClock: z.string().nullable(),
  measureCode: z.string(),
  value: z.number(),
  unit: z.string(),
  rowLabel: z.string(),
  vine: z.number().int(),
  /** Given where vines stand without rows. */
  place: lonLat.optional(),
  /** As the reader saw it, where that is not the name of today. */
  seenAs: z.object({ row: z.string(), vine: z.number().int() }).nullable(),
  isReserve: z.boolean(),
  note: z.string(),
  isLeftOut: z.boolean(),
  /** It corrects an earlier record of the same reading, which stays in the history. */
  isCorrected: z.boolean(),
});

export const conflictCard = z.object({
  id,
  kind: conflictKind,
  state: z.enum(['open', 'settled']),
  blockName: z.string(),
  roundDate: z.string().nullable(),
  readings: z.array(conflictReading),
  readingIds: z.array(id),
  choice: conflictAnswer.nullable(),
  keptReadingId: id.nullable(),
  settledBy: z.string().nullable(),
  settledAt: z.string().nullable(),
  createdAt: z.string(),
  maySettle: z.boolean(),
  /** Settled, and this person may take the answer back. */
  mayReopen: z.boolean(),
});
export type ConflictCard = z.infer<typeof conflictCard>;

export const conflictList = z.object({ items: z.array(conflictCard), bags: z.array(bagClash), settledBags: z.array(settledBagClash), total: z.int(), open: z.int() });
export type ConflictList = z.infer<typeof conflictList>;

export const conflictChoice = z.object({ choice: conflictAnswer, keptReadingId: id.nullable().default(null) });
export type ConflictChoice = z.infer<typeof conflictChoice>;
