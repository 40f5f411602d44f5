import { Router } from 'express';
import { accessOf, allow } from '../access/guard.ts';
import { today } from '../services/today/today.ts';

/** What waits for the person in this estate. */
export function todayRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/today', allow('estate.see', 'read'), async (request, response) => {
    response.set('cache-control', 'no-store').json(await today(accessOf(request), new Date()));
  });
  return router;
}
