import { rateLimit } from 'express-rate-limit';
import type { RequestHandler } from 'express';
import { TooMuch } from '../errors.ts';

const windowMs = 15 * 60_000;

/** At most so many tries from one address in a quarter of an hour; with `failedOnly` those that went well do not count. */
export function limitTries(limit: number, { failedOnly, code, message }: { failedOnly: boolean; code: string; message: string }): RequestHandler {
  return rateLimit({
    windowMs,
    limit,
    skipSuccessfulRequests: failedOnly,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    handler: () => {
      throw new TooMuch(code, message);
    },
  });
}
