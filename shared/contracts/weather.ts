import { z } from 'zod';
import { isoDate } from './common.ts';

const degrees = z.number().min(-60, 'A temperature lies between −60 and 60 °C.').max(60, 'A temperature lies between −60 and 60 °C.').nullable();

/** One day as typed. Both temperatures or none: a mean of one does not exist. */
export const weatherDay = z
  .object({ day: isoDate, maxC: degrees, minC: degrees, rainMm: z.number().min(0, 'Rain is 0 or more.').max(2000).nullable() })
  .refine(({ maxC, minC }) => (maxC === null) === (minC === null), { path: ['minC'], message: 'Give the highest and the lowest temperature, or neither.' })
  .refine(({ maxC, minC }) => maxC === null || minC === null || minC <= maxC, { path: ['minC'], message: 'The lowest temperature is above the highest. Check which is which.' })
  .refine(({ maxC, rainMm }) => maxC !== null || rainMm !== null, { path: ['rainMm'], message: 'Give temperatures, rain, or both.' });

/** A station's table as text. Without `apply` it is only read back; with it all days are kept, or none. */
export const weatherFile = z.object({
  text: z.string().max(1_500_000, 'This table is longer than 1.5 million characters. Cut it to the seasons you need.'),
  dateOrder: z.enum(['dmy', 'mdy']).nullable().default(null),
  decimalMark: z.enum(['.', ',']).nullable().default(null),
  units: z.enum(['metric', 'us']).nullable().default(null),
  apply: z.boolean().default(false),
});

const shownDay = z.object({ day: z.string(), maxC: z.number().nullable(), minC: z.number().nullable(), rainMm: z.number().nullable() });

export const weatherReading = z.object({
  days: z.array(shownDay),
  questions: z.array(z.enum(['dateOrder', 'decimalMark', 'units'])),
  problems: z.array(z.object({ code: z.string(), line: z.number().int().nullable(), cell: z.string() })),
  columns: z.array(z.object({ name: z.string(), as: z.string() })),
  units: z.enum(['metric', 'us']),
  /** Lines that hold a day and no figure: left out. */
  without: z.number().int(),
  /** Days that are kept already and would be replaced. */
  replaces: z.number().int(),
  kept: z.number().int(),
});
export type WeatherReading = z.infer<typeof weatherReading>;

export const heatSum = z.object({ sum: z.number(), from: z.string(), to: z.string(), days: z.number().int(), missing: z.number().int() });

export const weatherView = z.object({
  days: z.array(shownDay.extend({ source: z.enum(['typed', 'imported']) })),
  heat: heatSum.nullable(),
});
export type WeatherView = z.infer<typeof weatherView>;

/** What stands beside a visit because it may explain its figures. */
export const visitConditions = z.object({ visit: z.string(), flags: z.array(z.enum(['wetFruit', 'rain', 'heat'])), rainMm: z.number().nullable(), maxC: z.number().nullable(), wetReadings: z.number().int() });

