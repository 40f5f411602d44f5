import { Router } from 'express';
import { passwordChange, resetAnswer, resetRequest } from '../../shared/contracts/account.ts';
import { signedIn } from '../access/guard.ts';
import type { LinkAddress } from '../access/linkAddress.ts';
import { limitTries } from '../access/tries.ts';
import { log } from '../log.ts';
import { changePassword } from '../services/account/changePassword.ts';
import { endOtherSessions, endSession, listSessions } from '../services/account/openSessions.ts';
import { askForReset, readReset, useReset } from '../services/account/resetPassword.ts';

interface Options {
  demo: boolean;
  signInTries: number;
  links: LinkAddress;
}

/** A known address costs a few writes more than an unknown one: both wait until this time has passed. */
const askFloorMs = 250;

/** One's own account: password, where one is signed in, and a new password for somebody who forgot it. */
export function accountRoutes(options: Options): Router {
  const router = Router();
  const failed = limitTries(options.signInTries, { failedOnly: true, code: 'tooManyTries', sentence: 'tooManyTries' });
  const asked = limitTries(options.signInTries, { failedOnly: false, code: 'tooManyResets', sentence: 'tooManyResets' });

  router.get('/account/sessions', async (request, response) => {
    const items = await listSessions(signedIn(request), { sid: request.sessionID, now: new Date() });
    response.set('cache-control', 'no-store').json({ items, total: items.length });
  });
  router.delete('/account/sessions', async (request, response) => {
    response.json(await endOtherSessions(signedIn(request), request.sessionID));
  });
  router.delete('/account/sessions/:key', async (request, response) => {
    await endSession(signedIn(request), String(request.params.key), new Date());
    response.status(204).end();
  });
  router.put('/account/password', failed, async (request, response) => {
    response.json(await changePassword(signedIn(request), passwordChange.parse(request.body), { sid: request.sessionID, now: new Date() }));
  });

  router.post('/password-resets', asked, async (request, response) => {
    const { email } = resetRequest.parse(request.body);
    const publicUrl = options.links.forAccount(request);
    const wait = new Promise((resolve) => setTimeout(resolve, askFloorMs));
    if (publicUrl === null) log.error('no link for a new password was written', new Error('PUBLIC_URL is needed for links in mails'));
    else await askForReset(email, { publicUrl, allowDemo: options.demo, now: new Date() });
    await wait;
    response.status(202).json({ asked: true });
  });
  router.get('/password-resets/:token', failed, async (request, response) => {
    response.set('cache-control', 'no-store').json(await readReset(String(request.params.token), new Date()));
  });
  router.post('/password-resets/use', failed, async (request, response) => {
    await useReset(resetAnswer.parse(request.body), new Date());
    response.status(204).end();
  });
  return router;
}
