import { Router } from 'express';
import { bagBatch, bagQuery, bagReceipt, bagsExpected, bagsMissing, bagSwap, clashChoice } from '../../shared/contracts/bags.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { closeBags } from '../services/bags/closeBags.ts';
import { listBags } from '../services/bags/listBags.ts';
import { expectAgain, receiveBags, reportMissing } from '../services/bags/receiveBags.ts';
import { reopenClash } from '../services/bags/reopenClash.ts';
import { settleClash } from '../services/bags/settleClash.ts';
import { swapBags } from '../services/bags/swapBags.ts';

/** Bags: closed in the row, received at the lab, exchanged where labels were. Never deleted. */
export function bagRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/bags', allow('readings.record', 'own'), async (request, response) => {
    const items = await listBags(accessOf(request), { ...bagQuery.parse(request.query), now: new Date() });
    response.json({ items, total: items.length });
  });
  router.post('/bags', allow('readings.record', 'own'), async (request, response) => {
    response.json(await closeBags(accessOf(request), bagBatch.parse(request.body), new Date()));
  });
  router.post('/bags/received', allow('lab.enter'), async (request, response) => {
    response.json({ outcomes: await receiveBags(accessOf(request), bagReceipt.parse(request.body).codes, new Date()) });
  });
  router.post('/bags/missing', allow('lab.enter'), async (request, response) => {
    response.json({ bagIds: await reportMissing(accessOf(request), bagsMissing.parse(request.body), new Date()) });
  });
  router.post('/bags/expected', allow('lab.enter'), async (request, response) => {
    response.json({ bagIds: await expectAgain(accessOf(request), bagsExpected.parse(request.body).bagIds) });
  });
  router.post('/bags/swap', allow('labels.settle'), async (request, response) => {
    await swapBags(accessOf(request), bagSwap.parse(request.body), new Date());
    response.status(204).end();
  });
  router.post('/bags/:bagId/settle', allow('labels.settle'), async (request, response) => {
    await settleClash(accessOf(request), idParam(request, 'bagId'), clashChoice.parse(request.body));
    response.status(204).end();
  });
  router.post('/bags/:bagId/reopen', allow('labels.settle'), async (request, response) => {
    await reopenClash(accessOf(request), idParam(request, 'bagId'));
    response.status(204).end();
  });
  return router;
}
