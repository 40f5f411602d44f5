import { z } from 'zod';
import { id } from '../../../shared/contracts/common.ts';

/** What an operation of the interface takes and gives; schemas are the contracts that the routes check with. */
export interface Operation {
  does: string;
  query?: z.ZodType;
  body?: z.ZodType;
  /** Takes files in the multipart field "files" instead of a body in JSON. */
  files?: true;
  /** Names the version it changes in If-Match, and is refused with 412 when somebody else was quicker. */
  conditional?: true;
  answer?: z.ZodType;
  /** Media type of an answer that is not JSON. */
  type?: string;
  /** When it is done; 200 where nothing else is said. */
  status?: 200 | 201 | 202 | 204;
}

/** By method and address below /api, written as at the routes: 'get /session'. */
export type Operations = Record<string, Operation>;

/** A whole list; lists that come in pages say so by themselves. */
export const listOf = <T extends z.ZodType>(item: T) => z.object({ items: z.array(item), total: z.int() });

/** The answer to making a thing. */
export const made = z.object({ id });

/** The same operations below an estate. */
export function belowEstate(operations: Operations): Operations {
  return Object.fromEntries(
    Object.entries(operations).map(([key, operation]) => {
      const [method, path] = key.split(' ');
      return [`${method} /estates/:estateId${path}`, operation];
    }),
  );
}
