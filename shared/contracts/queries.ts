import { z } from 'zod';
import { id, isoDate } from './common.ts';

// What an address may carry after its question mark, where no other contract has it.

export const oneBlock = z.object({ block: id });
export const ofBlock = oneBlock.partial();
export const ofBlockOrPlan = z.object({ block: id.optional(), plan: id.optional() });
export const ofSeason = z.object({ season: id.optional() });

/** Answers as they were on a date. */
export const knownOn = z.object({ known: isoDate.optional() });
export const boardAsked = knownOn.extend({ scenario: id.optional() });
export const ripenessAsked = knownOn.extend({ season: id.optional(), unchecked: z.enum(['out', 'in']).default('out') });

/** Another number of zones than the one chosen, out of the numbers that were computed. */
export const shownZones = z.object({ zones: z.coerce.number().int().min(1).max(6).optional() });
export const zonesExport = shownZones.extend({ format: z.string() });
export const letterPaper = z.object({ size: z.enum(['A4', 'Letter']).default('A4') });
export const zonesReport = shownZones.extend(letterPaper.shape);
export const comparedWith = shownZones.extend({ with: id });

/** Somebody else's walk, for typing their sheet. */
export const whoseWalk = z.object({ person: id.optional() });
export const crewSheet = z.object({ paper: z.enum(['a4', 'letter']).default('a4') });
export const daySheet = crewSheet.extend({ onDate: isoDate });
const labelPaper = z.object({ paper: z.enum(['a4', 'letter', 'single']).default('a4') });
export const roundLabels = labelPaper.extend({ per: z.enum(['vine', 'zone']).default('vine') });
export const blankLabels = labelPaper.extend({ count: z.coerce.number().int().min(1, 'Print at least one label.').max(500, 'At most 500 labels at once.') });
