import { z } from 'zod';
import { id } from './common.ts';

/** One straight piece of a row between two headlands, from the start end to the other. */
export const rowPiece = z.object({
  from: z.tuple([z.number(), z.number()]),
  to: z.tuple([z.number(), z.number()]),
  lengthM: z.number().positive(),
  /** Ordinal of the first vine of the piece, counted from 1 at the start end of the row. */
  firstVine: z.number().int().min(1),
  vineCount: z.number().int().min(0),
  /** Distance from the start of the piece to its first vine, and between vines, in metres. */
  firstM: z.number().min(0),
  stepM: z.number().positive(),
});
export type RowPiece = z.infer<typeof rowPiece>;

export const vineState = z.enum(['missing', 'dead', 'replant', 'offType', 'sick']);
export type VineState = z.infer<typeof vineState>;

export const blockRow = z.object({
  id,
  ordinal: z.number().int(),
  label: z.string(),
  labelWas: z.string().nullable(),
  vineCount: z.number().int(),
  pieces: z.array(rowPiece),
  /** Known vines that are not plain living ones, by ordinal. */
  vines: z.array(z.object({ ordinal: z.number().int().min(1), state: vineState })),
});
export type BlockRowView = z.infer<typeof blockRow>;
