import type { Request } from 'express';
import 'express-session';

declare module 'express-session' {
  interface SessionData {
    device?: string;
    signedInAt?: string;
  }
}

const longestDevice = 200;

/** Signs in: the library gives the session a new id first, so that an id known before is worth nothing after. */
export async function startSession(request: Request, user: Express.User, now: Date): Promise<void> {
  await new Promise<void>((resolve, reject) => request.logIn(user, (error: unknown) => (error ? reject(error as Error) : resolve())));
  request.session.device = (request.get('user-agent') ?? '').slice(0, longestDevice);
  request.session.signedInAt = now.toISOString();
}
