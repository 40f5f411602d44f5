import { Router, type Request } from 'express';
import { crewCodeTyped, crewSignIn } from '../../shared/contracts/phones.ts';
import { startSession } from '../access/session.ts';
import { limitTries } from '../access/tries.ts';
import { crewOffer } from '../services/crew/crewCode.ts';
import { signInWithPin } from '../services/crew/crewPin.ts';
import { describeSession } from '../services/sessions.ts';

/** The door of shared phones: code, name, PIN. */
export function crewDoorRoutes(options: { csrfToken: (request: Request) => string; demo: boolean; signInTries: number }): Router {
  const router = Router();
  const tries = limitTries(options.signInTries, { failedOnly: true, code: 'tooManyTries', sentence: 'tooManyTries' });
  router.post('/crew/people', tries, async (request, response) => {
    response.json(await crewOffer(crewCodeTyped.parse(request.body).code, new Date()));
  });
  router.post('/crew/session', tries, async (request, response) => {
    const { personId } = await signInWithPin(crewSignIn.parse(request.body), new Date());
    await startSession(request, { id: personId }, new Date());
    response.json(await describeSession(personId, { csrfToken: options.csrfToken(request), demo: options.demo, now: new Date() }));
  });
  return router;
}
