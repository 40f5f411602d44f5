import { Router } from 'express';
import { newRestriction, pickIntervalChange, restrictionLift } from '../../shared/contracts/restrictions.ts';
import { ofBlock } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { changePickInterval, liftRestriction, listRestrictions, setRestriction } from '../services/restrictions.ts';

/** Entry restrictions as recorded. What is recorded never says that it is safe to enter. */
export function restrictionRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/restrictions', allow('restrictions.see', 'read'), async (request, response) => {
    const { block } = ofBlock.parse(request.query);
    const { items, lifters } = await listRestrictions(accessOf(request), { ...(block ? { blockId: block } : {}), now: new Date() });
    response.json({ items, total: items.length, lifters });
  });
  router.post('/restrictions', allow('restrictions.set'), async (request, response) => {
    response.status(201).json(await setRestriction(accessOf(request), newRestriction.parse(request.body)));
  });
  router.post('/restrictions/:restrictionId/lift', allow('restrictions.lift'), async (request, response) => {
    const { reason } = restrictionLift.parse(request.body);
    await liftRestriction(accessOf(request), idParam(request, 'restrictionId'), { reason, now: new Date() });
    response.status(204).end();
  });
  router.post('/restrictions/:restrictionId/pick-interval', allow('restrictions.lift'), async (request, response) => {
    await changePickInterval(accessOf(request), idParam(request, 'restrictionId'), pickIntervalChange.parse(request.body), { now: new Date() });
    response.status(204).end();
  });
  return router;
}
