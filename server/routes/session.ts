import { Router, type Request } from 'express';
import type { Passport } from 'passport';
import { credentials, personChange } from '../../shared/contracts/session.ts';
import { invitationAnswer } from '../../shared/contracts/people.ts';
import { signedIn } from '../access/guard.ts';
import { startSession } from '../access/session.ts';
import { limitTries } from '../access/tries.ts';
import { NotSignedIn } from '../errors.ts';
import { acceptInvitation, readInvitation } from '../services/people/invitations.ts';
import { changeSelf } from '../services/people/people.ts';
import { describeSession } from '../services/sessions.ts';
import { say } from '../sentences/say.ts';

interface Options {
  passport: InstanceType<typeof Passport>;
  csrfToken: (request: Request) => string;
  demo: boolean;
  signInTries: number;
}

/** The door: who is signed in, signing in and out, and joining with an invitation. */
export function sessionRoutes(options: Options): Router {
  const router = Router();
  const describe = (request: Request) =>
    describeSession(request.user?.id ?? null, { csrfToken: options.csrfToken(request), demo: options.demo, now: new Date() });
  const tries = limitTries(options.signInTries, { failedOnly: true, code: 'tooManyTries', sentence: 'tooManySignIns' });

  router.get('/session', async (request, response) => {
    response.set('cache-control', 'no-store').json(await describe(request));
  });

  router.post('/session', tries, async (request, response, next) => {
    credentials.parse(request.body);
    const user = await new Promise<Express.User | false>((resolve, reject) => {
      const handler = options.passport.authenticate('local', (error: unknown, found: Express.User | false) => (error ? reject(error as Error) : resolve(found))) as (...args: unknown[]) => void;
      handler(request, response, next);
    });
    if (!user) throw new NotSignedIn(say('wrongSignIn'));
    await startSession(request, user, new Date());
    response.json(await describe(request));
  });

  router.delete('/session', async (request, response) => {
    await new Promise<void>((resolve, reject) => request.logout((error: unknown) => (error ? reject(error as Error) : resolve())));
    response.status(204).end();
  });

  router.patch('/session/person', async (request, response) => {
    await changeSelf(signedIn(request), personChange.parse(request.body));
    response.json(await describe(request));
  });

  router.get('/invitations/:token', tries, async (request, response) => {
    response.json(await readInvitation(String(request.params.token), new Date()));
  });

  router.post('/invitations/accept', tries, async (request, response) => {
    const { personId } = await acceptInvitation(invitationAnswer.parse(request.body), new Date());
    await startSession(request, { id: personId }, new Date());
    response.status(201).json(await describe(request));
  });

  return router;
}
