import { z } from 'zod';
import { phaseIds } from '../season/phases.ts';
import { brixMethods } from './lots.ts';
import { changesOf, id, isoDate, language, pointGeometry, shortName, units } from './common.ts';

/** Numbers an estate sets for itself; each has a stated starting value. */
export const estateSettings = z.object({
  /** More samples than this in one zone and visit count as impractical. */
  impracticalSamples: z.number().int().min(5).max(1000).default(60),
  /** Hours one person can sample in a day. */
  dayHours: z.number().min(1).max(14).default(8),
  costPerHour: z.number().min(0).default(25),
  currency: z.string().max(8).default('EUR'),
  /** Least vines sampled in a zone. */
  floorVines: z.number().int().min(2).max(50).default(5),
  /** What plans begin with; each can change it. Speed on level ground between vines: Tobler 1993 off a path (see walkTime.ts). */
  walkingKmPerHour: z.number().min(0.5).max(10).default(3.01),
  /** Finding a vine and setting up there; planning judgement. */
  setUpSeconds: z.number().min(0).max(3600).default(15),
  /** Crew see results only where the manager switches it on. */
  crewSeeResults: z.boolean().default(false),
  emergencyNumber: z.string().max(40).default('112'),
  meetingPoint: z.string().max(200).default(''),
  /** How potential alcohol is reckoned from °Brix, for everybody; changed by those who confirm lots. */
  alcoholMethod: z.enum(brixMethods).default('brixFactor'),
});
export type EstateSettings = z.infer<typeof estateSettings>;

function isTimeZone(name: string): boolean {
  try {
    return new Intl.DateTimeFormat('en', { timeZone: name }).resolvedOptions().timeZone !== '';
  } catch {
    return false;
  }
}

export const newEstate = z.object({
  name: shortName,
  country: z.string().trim().max(60).default(''),
  timeZone: z.string().trim().min(1).max(60).refine(isTimeZone, 'This is no time zone; choose one from the list, such as Europe/Lisbon.').default('UTC'),
  units: units.default('metric'),
  languages: z.array(language).min(1).default(['en']),
  seasonStartMonth: z.number().int().min(1).max(12).default(12),
  marker: pointGeometry.nullable().default(null),
});
export type NewEstate = z.infer<typeof newEstate>;

export const estateChange = changesOf(newEstate).extend({ settings: changesOf(estateSettings.omit({ alcoholMethod: true })).optional() });

/** What the owner is shown of backups: when the last good one was made, and when one was last read back for a trial. */
export const backupView = z.object({ lastAt: z.string().nullable(), rows: z.int(), files: z.int(), drillAt: z.string().nullable(), drillOk: z.boolean().nullable() });
export type BackupView = z.infer<typeof backupView>;

export const estateFacts = z.object({ facts: newEstate, settings: estateSettings, backup: backupView.nullable() });
export type EstateFactsView = z.infer<typeof estateFacts>;

export const seasonView = z.object({ id, name: z.string(), startsOn: isoDate, endsOn: isoDate, phases: z.record(z.string(), z.tuple([isoDate, isoDate])), closed: z.boolean() });
const phase = z.tuple([isoDate, isoDate]);
export const seasonChange = z.object({ phases: z.partialRecord(z.enum(phaseIds), phase) });
export type SeasonChange = z.infer<typeof seasonChange>;
export type SeasonView = z.infer<typeof seasonView>;
