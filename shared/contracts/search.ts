import { z } from 'zod';
import { id } from './common.ts';

export const foundKinds = ['block', 'zone', 'lot', 'person', 'round', 'layer', 'bag'] as const;

/** A thing found. `name` is what was matched, `about` says where it belongs (a block's name, a date); `to` is the id its screen needs. */
export const found = z.object({ kind: z.enum(foundKinds), id, name: z.string(), about: z.string(), to: id.nullable() });
export type Found = z.infer<typeof found>;

export const searchQuery = z.object({ q: z.string().trim().min(1, 'Type at least one letter.').max(100) });
export const searchAnswer = z.object({ items: z.array(found), total: z.int() });
