import type { Request } from 'express';

/** Signs a person in on this browser, under a new session id. */
export function startSession(request: Request, user: Express.User): Promise<void> {
  return new Promise((resolve, reject) => request.logIn(user, (error: unknown) => (error ? reject(error as Error) : resolve())));
}
