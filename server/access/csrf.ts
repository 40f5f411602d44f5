import { csrfSync } from 'csrf-sync';
import { NotAllowed } from '../errors.ts';
import type { Request, RequestHandler } from 'express';
import { say } from '../sentences/say.ts';

/** Token bound to the session, sent by the browser in the header `x-csrf-token` on every write. */
export function makeCsrf(): { token: (request: Request) => string; protect: RequestHandler } {
  const { csrfSynchronisedProtection, generateToken, invalidCsrfTokenError } = csrfSync({
    getTokenFromRequest: (request) => request.get('x-csrf-token'),
  });
  return {
    token: (request) => generateToken(request),
    protect: (request, response, next) => {
      csrfSynchronisedProtection(request, response, (error?: unknown) => {
        next(error === invalidCsrfTokenError ? new NotAllowed(say('pageTooOld')) : error);
      });
    },
  };
}
