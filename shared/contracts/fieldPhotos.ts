import { z } from 'zod';
import { id, isoTime, lonLat } from './common.ts';

/** What comes beside the picture itself. The id is made on the phone, so that sending twice keeps one. */
export const newFieldPhoto = z.object({ id, blockId: id, roundId: id.nullable().default(null), rowId: id, ordinal: z.number().int().min(-10_000).max(100_000), note: z.string().trim().max(600).default(''), takenAt: isoTime });
export type NewFieldPhoto = z.infer<typeof newFieldPhoto>;

export const fieldPhotoView = z.object({ id, blockId: id, blockName: z.string(), rowLabel: z.string(), vine: z.number().int(), place: lonLat.optional(), note: z.string(), person: z.string().nullable(), takenAt: z.string() });
export type FieldPhotoView = z.infer<typeof fieldPhotoView>;
