import { z } from 'zod';
import { id } from './common.ts';
import { figure } from './lots.ts';

export const massUnits = ['kg', 't', 'lb', 'shortTon'] as const;
export type MassUnit = (typeof massUnits)[number];

/** Kilograms in one of each. Source: NIST SP 811 (2008), Appendix B. */
export const kgPerUnit: Record<MassUnit, number> = { kg: 1, t: 1000, lb: 0.45359237, shortTon: 907.18474 };

export const longestTicketNo = 60;
/** No weighbridge takes more at once; above it a unit was mistaken. */
export const mostLoadKg = 200_000;

const splitPart = z.object({
  blockId: id,
  zoneNumber: z.number().int().min(1).nullable().default(null),
  kg: z.number().positive(),
  /** Weighed on its own, or shared out by bins, rows or expectation. */
  how: z.enum(['measured', 'shared']),
  /** What the parts rest on; `count` bins or rows where they were counted. */
  by: z.enum(['scale', 'bins', 'rows', 'share']).default('share'),
  count: z.number().min(0).nullable().default(null),
});
export type TicketSplit = z.infer<typeof splitPart>;

/** A scale ticket as it was handed over. It is never edited: a correction is a new ticket that names the one it corrects. */
export const newTicket = z
  .object({
    lotId: id,
    ticketNo: z.string().trim().min(1, 'Type the number printed on the ticket.').max(longestTicketNo),
    gross: z.number().positive(),
    tare: z.number().min(0),
    unit: z.enum(massUnits).default('kg'),
    weighedAt: z.iso.datetime({ offset: true }),
    split: z.array(splitPart).max(100).default([]),
    corrects: id.nullable().default(null),
    note: z.string().trim().max(500).default(''),
  })
  // A correction may take its load out: gross and tare are alike then.
  .refine((ticket) => ticket.tare < ticket.gross || (ticket.corrects !== null && ticket.tare === ticket.gross), { path: ['tare'], message: 'The tare must be below the gross weight. Check which is which.' })
  .refine((ticket) => ticket.gross * kgPerUnit[ticket.unit] <= mostLoadKg, { path: ['gross'], message: 'More than 200 t on one ticket. Check the weight and its unit.' })
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

/** A weighbridge's table as text. Without `apply` it is only read back. */
export const ticketFile = z.object({
  text: z.string().max(500_000, 'This table is longer than 500 000 characters. Cut it to one season.'),
  dateOrder: z.enum(['dmy', 'mdy']).nullable().default(null),
  decimalMark: z.enum(['.', ',']).nullable().default(null),
  unit: z.enum(massUnits).nullable().default(null),
  apply: z.boolean().default(false),
});

export const ticketReading = z.object({
  tickets: z.array(z.object({ line: z.number().int(), ticketNo: z.string(), lotName: z.string(), netKg: z.number(), day: z.string(), netOnly: z.boolean() })),
  questions: z.array(z.enum(['dateOrder', 'decimalMark', 'unit'])),
  problems: z.array(z.object({ code: z.string(), line: z.number().int().nullable(), cell: z.string() })),
  kept: z.number().int(),
});
export type TicketReading = z.infer<typeof ticketReading>;

/** One lot, forecast against what the scale said. */
const reviewedLot = z.object({
  lotId: id,
  lotName: z.string(),
  forecast: figure.nullable(),
  /** Day of the forecast: that of the first notice, or null when it is the estimate of today. */
  /** The pick notice, what was known when the first load came in, or the estimate of today. */
  forecastFrom: z.enum(['notice', 'known', 'today']),
  forecastOn: z.string().nullable(),
  actualT: z.number().nullable(),
  tickets: z.number().int(),
  held: z.boolean().nullable(),
});

const compared = z.object({
  measure: z.string(),
  /** Readings of fruit; of yield the scale, bins counted on mixed loads, loads shared out (which say nothing of zones), or the forecast. */
  basis: z.enum(['readings', 'weighed', 'bins', 'shared', 'expected']),
  unit: z.string(),
  /** Day of the readings; null for tonnes. */
  on: z.string().nullable(),
  n: z.number().int().nullable(),
  lowest: z.number().int(),
  highest: z.number().int(),
  least: z.number(),
  most: z.number(),
  difference: z.number(),
  halfWidth: z.number().nullable(),
  p: z.number().nullable(),
  differ: z.boolean().nullable(),
  /** Part of the block's spread that lies between its zones: what picking by zone could separate. */
  betweenShare: z.number().nullable(),
});

const errorShares = z.array(z.object({ part: z.enum(['vines', 'clusters', 'clusterWeight', 'growth', 'losses', 'rest']), tonnes: z.number() }));

/** Did the zones of a block matter: by measure, with what it took to know. */
const zoneQuestion = z.object({
  blockId: id,
  blockName: z.string(),
  zones: z.number().int(),
  measures: z.array(compared),
  lastSeason: z.boolean().nullable(),
  /** Lots that its zones went to; one means that they were picked together all the same. */
  /** Every vine of its zones was picked into the same lot. */
  oneLot: z.boolean(),
  readings: z.number().int(),
  /** Hours at the vine for these readings, without the walk; reckoned from the seconds a sample takes. */
  hours: z.number(),
  /** Readings of sugar on the newest visit, and how many its margin would have taken. */
  sugar: z.object({ taken: z.number().int(), needed: z.number().int() }).nullable(),
  errorParts: errorShares,
  verdict: z.enum(['keep', 'merge', 'retire', 'notRead', 'oneZone']),
});

const summary = z.object({ n: z.number().int(), bias: z.number().nullable(), meanAbsoluteError: z.number().nullable(), meanRelativeError: z.number().nullable(), held: z.number().int(), few: z.boolean() });

/** A forecast of one zone, made on one day, against what the scale said. */
const reviewedZone = z.object({ blockId: id, blockName: z.string(), zone: z.number().int(), forecastOn: z.string(), forecast: figure, actualT: z.number(), how: z.enum(['measured', 'shared']), held: z.boolean().nullable() });

export const reviewView = z.object({
  seasonId: id,
  seasonName: z.string(),
  closed: z.boolean(),
  lots: z.array(reviewedLot),
  summary,
  zones: z.array(reviewedZone),
  byBlock: z.array(summary.extend({ blockName: z.string() })),
  byDate: z.array(summary.extend({ forecastOn: z.string() })),
  /** Where the error of the last forecasts came from, in tonnes over all zones weighed. */
  errorParts: errorShares,
  blocks: z.array(zoneQuestion),
});
export type ReviewView = z.infer<typeof reviewView>;
