import { z } from 'zod';
import { id } from './common.ts';
import { figure } from './lots.ts';

export const massUnits = ['kg', 't', 'lb', 'shortTon'] as const;
export type MassUnit = (typeof massUnits)[number];

/** Kilograms in one of each. Source: NIST SP 811 (2008), Appendix B. */
export const kgPerUnit: Record<MassUnit, number> = { kg: 1, t: 1000, lb: 0.45359237, shortTon: 907.18474 };

const splitPart = z.object({
  blockId: id,
  zoneNumber: z.number().int().min(1).nullable().default(null),
  kg: z.number().positive(),
  /** Weighed on its own, or shared out by bins, rows or expectation. */
  how: z.enum(['measured', 'shared']),
});
export type TicketSplit = z.infer<typeof splitPart>;

/** A scale ticket as it was handed over. It is never edited: a correction is a new ticket that names the one it corrects. */
export const newTicket = z
  .object({
    lotId: id,
    ticketNo: z.string().trim().min(1, 'Type the number printed on the ticket.').max(60),
    gross: z.number().positive(),
    tare: z.number().min(0),
    unit: z.enum(massUnits).default('kg'),
    weighedAt: z.iso.datetime({ offset: true }),
    split: z.array(splitPart).max(100).default([]),
    corrects: id.nullable().default(null),
    note: z.string().trim().max(500).default(''),
  })
  .refine((ticket) => ticket.tare < ticket.gross, { path: ['tare'], message: 'The tare must be below the gross weight. Check which is which.' })
  .refine((ticket) => ticket.corrects === null || ticket.note !== '', { path: ['note'], message: 'Say why the ticket is corrected.' });
export type NewTicket = z.infer<typeof newTicket>;

export const ticketView = z.object({
  id,
  lotId: id,
  lotName: z.string(),
  ticketNo: z.string(),
  grossKg: z.number(),
  tareKg: z.number(),
  netKg: z.number(),
  unit: z.enum(massUnits),
  weighedAt: z.string(),
  split: z.array(splitPart.extend({ blockName: z.string() })),
  corrects: id.nullable(),
  correctedBy: id.nullable(),
  note: z.string(),
  enteredBy: z.string(),
  enteredAt: z.string(),
});
export type TicketView = z.infer<typeof ticketView>;

/** One lot, forecast against what the scale said. */
const reviewedLot = z.object({
  lotId: id,
  lotName: z.string(),
  forecast: figure.nullable(),
  /** Day of the forecast: that of the first notice, or null when it is the estimate of today. */
  forecastOn: z.string().nullable(),
  actualT: z.number().nullable(),
  tickets: z.number().int(),
  held: z.boolean().nullable(),
});

const zoneQuestion = z.object({
  blockId: id,
  blockName: z.string(),
  zones: z.number().int(),
  measures: z.array(z.object({ measure: z.string(), unit: z.string(), on: z.string(), n: z.number().int(), least: z.number(), most: z.number(), p: z.number().nullable(), differ: z.boolean().nullable() })),
  verdict: z.enum(['keep', 'cannotTell', 'notRead', 'oneZone']),
});

export const reviewView = z.object({
  seasonId: id,
  seasonName: z.string(),
  closed: z.boolean(),
  lots: z.array(reviewedLot),
  summary: z.object({ n: z.number().int(), bias: z.number().nullable(), meanAbsoluteError: z.number().nullable(), meanRelativeError: z.number().nullable(), held: z.number().int(), few: z.boolean() }),
  blocks: z.array(zoneQuestion),
});
export type ReviewView = z.infer<typeof reviewView>;
