import { rateLimit } from 'express-rate-limit';
import type { RequestHandler } from 'express';
import { TooMuch } from '../errors.ts';
import type { SentenceKey } from '../sentences/en.ts';
import { say } from '../sentences/say.ts';

const windowMs = 15 * 60_000;

/** At most so many tries from one address in a quarter of an hour; with `failedOnly` those that went well do not count. */
export function limitTries(limit: number, { failedOnly, code, sentence }: { failedOnly: boolean; code: string; sentence: SentenceKey }): RequestHandler {
  return rateLimit({
    windowMs,
    limit,
    skipSuccessfulRequests: failedOnly,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    handler: () => {
      throw new TooMuch(code, say(sentence));
    },
  });
}
