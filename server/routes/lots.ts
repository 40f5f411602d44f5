import { Router } from 'express';
import { z } from 'zod';
import { id } from '../../shared/contracts/common.ts';
import { lotChange, lotParts, newLot, newScenario, newTank, tankChange } from '../../shared/contracts/lots.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { listTanks, lotsBoard } from '../services/lots/board.ts';
import { changeLot, changeTank, confirmLot, copyScenario, createLot, createTank, deleteLot, setLotParts } from '../services/lots/changeLots.ts';
import { blockRipening } from '../services/results/ripening.ts';
import { zoneResults } from '../services/results/zoneResults.ts';
import { versionMatched } from './etag.ts';

const boardQuery = z.object({ scenario: id.optional() });
const resultsQuery = z.object({ season: id.optional() });
const today = () => new Date().toISOString().slice(0, 10);

/** Results by zone, pick lots, what-ifs and tanks. Writes on a lot name its version in If-Match. */
export function lotRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.get('/zonings/:zoningId/results', allow('results.see', 'read'), async (request, response) => {
    const { season } = resultsQuery.parse(request.query);
    response.json(await zoneResults(accessOf(request), idParam(request, 'zoningId'), season ? { seasonId: season } : {}));
  });
  router.get('/blocks/:blockId/ripening', allow('results.see', 'read'), async (request, response) => {
    response.json(await blockRipening(accessOf(request), idParam(request, 'blockId')));
  });

  router.get('/lots', allow('lots.see', 'read'), async (request, response) => {
    response.json(await lotsBoard(accessOf(request), { scenarioId: boardQuery.parse(request.query).scenario ?? null, today: today() }));
  });
  router.post('/lots', allow('lots.build', 'propose'), async (request, response) => {
    response.status(201).json(await createLot(accessOf(request), newLot.parse(request.body), today()));
  });
  router.patch('/lots/:lotId', allow('lots.build', 'propose'), async (request, response) => {
    await changeLot(accessOf(request), idParam(request, 'lotId'), lotChange.parse(request.body), versionMatched(request));
    response.status(204).end();
  });
  router.put('/lots/:lotId/parts', allow('lots.build', 'propose'), async (request, response) => {
    await setLotParts(accessOf(request), idParam(request, 'lotId'), lotParts.parse(request.body), versionMatched(request));
    response.status(204).end();
  });
  router.post('/lots/:lotId/confirm', allow('lots.confirm', 'propose'), async (request, response) => {
    await confirmLot(accessOf(request), idParam(request, 'lotId'), versionMatched(request), new Date());
    response.status(204).end();
  });
  router.delete('/lots/:lotId', allow('lots.build'), async (request, response) => {
    await deleteLot(accessOf(request), idParam(request, 'lotId'), versionMatched(request));
    response.status(204).end();
  });
  router.post('/scenarios', allow('lots.build', 'propose'), async (request, response) => {
    response.status(201).json(await copyScenario(accessOf(request), newScenario.parse(request.body)));
  });

  router.get('/tanks', allow('lots.see', 'read'), async (request, response) => {
    const items = await listTanks(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/tanks', allow('lots.build'), async (request, response) => {
    response.status(201).json(await createTank(accessOf(request), newTank.parse(request.body)));
  });
  router.patch('/tanks/:tankId', allow('lots.build'), async (request, response) => {
    await changeTank(accessOf(request), idParam(request, 'tankId'), tankChange.parse(request.body));
    response.status(204).end();
  });
  router.delete('/tanks/:tankId', allow('lots.build'), async (request, response) => {
    await changeTank(accessOf(request), idParam(request, 'tankId'), { retiredAt: new Date() });
    response.status(204).end();
  });
  return router;
}
