import { Router } from 'express';
import { measureChange, newMeasure } from '../../shared/contracts/measures.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { addMeasure, changeMeasure, listMeasures } from '../services/measures.ts';

/** What the estate measures, how precisely and how surely. */
export function measureRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/measures', allow('estate.see', 'read'), async (request, response) => {
    const items = await listMeasures(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/measures', allow('plans.margins'), async (request, response) => {
    response.status(201).json(await addMeasure(accessOf(request), newMeasure.parse(request.body)));
  });
  router.patch('/measures/:measureId', allow('plans.margins'), async (request, response) => {
    response.json(await changeMeasure(accessOf(request), idParam(request, 'measureId'), measureChange.parse(request.body)));
  });
  return router;
}
