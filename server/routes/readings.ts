import { Router } from 'express';
import { conflictChoice } from '../../shared/contracts/conflicts.ts';
import { readingBatch, readingExclusion, readingQuery } from '../../shared/contracts/readings.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { listConflicts } from '../services/readings/listConflicts.ts';
import { excludeReading, listReadings } from '../services/readings/listReadings.ts';
import { recordBatch } from '../services/readings/recordBatch.ts';
import { reopenConflict } from '../services/readings/reopenConflict.ts';
import { settleConflict } from '../services/readings/settleConflict.ts';

/** Readings: appended in batches that may be repeated, never changed, left out only with a reason. */
export function readingRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/readings', allow('readings.record', 'own'), async (request, response) => {
    response.json(await listReadings(accessOf(request), readingQuery.parse(request.query)));
  });
  router.post('/readings', allow('readings.record', 'own'), async (request, response) => {
    response.json(await recordBatch(accessOf(request), readingBatch.parse(request.body), new Date()));
  });
  router.put('/readings/:readingId/exclusion', allow('outliers.exclude'), async (request, response) => {
    await excludeReading(accessOf(request), idParam(request, 'readingId'), readingExclusion.parse(request.body).reason);
    response.status(204).end();
  });
  router.get('/conflicts', allow('conflicts.settle', 'own'), async (request, response) => {
    response.json(await listConflicts(accessOf(request)));
  });
  router.post('/conflicts/:conflictId/settle', allow('conflicts.settle', 'own'), async (request, response) => {
    await settleConflict(accessOf(request), idParam(request, 'conflictId'), conflictChoice.parse(request.body), new Date());
    response.status(204).end();
  });
  router.post('/conflicts/:conflictId/reopen', allow('conflicts.settle', 'own'), async (request, response) => {
    await reopenConflict(accessOf(request), idParam(request, 'conflictId'), new Date());
    response.status(204).end();
  });
  return router;
}
