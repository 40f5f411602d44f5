import { Router } from 'express';
import { estateChange, newEstate, seasonChange } from '../../shared/contracts/estate.ts';
import { accessOf, allow, idParam, signedIn } from '../access/guard.ts';
import { changeEstate, changeSeason, createAnother, readEstateFacts } from '../services/estates.ts';
import { describeSession } from '../services/sessions.ts';

/** Estates a person belongs to, and a new one of their own. */
export function estateListRoutes(): Router {
  const router = Router();
  router.get('/estates', async (request, response) => {
    const { estates } = await describeSession(signedIn(request), { csrfToken: '', demo: false, now: new Date() });
    response.json({ items: estates, total: estates.length });
  });
  router.post('/estates', async (request, response) => {
    const id = await createAnother(signedIn(request), newEstate.parse(request.body), today());
    response.status(201).json({ id });
  });
  return router;
}

/** The estate's own facts and settings. */
export function estateRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/', allow('estate.see', 'read'), async (request, response) => {
    const access = accessOf(request);
    const { estates } = await describeSession(access.personId, { csrfToken: '', demo: false, now: new Date() });
    response.json(estates.find((estate) => estate.id === access.estateId));
  });
  router.get('/facts', allow('estate.settings', 'read'), async (request, response) => {
    response.json(await readEstateFacts(accessOf(request)));
  });
  router.patch('/', allow('estate.settings'), async (request, response) => {
    await changeEstate(accessOf(request), estateChange.parse(request.body));
    response.status(204).end();
  });
  router.patch('/seasons/:seasonId', allow('estate.settings'), async (request, response) => {
    await changeSeason(accessOf(request), idParam(request, 'seasonId'), seasonChange.parse(request.body));
    response.status(204).end();
  });
  return router;
}

const today = () => new Date().toISOString().slice(0, 10);
