import { Router, type Request } from 'express';
import { alcoholChoice, dayCapacity, lotChange, lotParts, newLot, newScenario, newTank, tankChange, zoneMove } from '../../shared/contracts/lots.ts';
import { boardAsked, knownOn, ofSeason, ripenessAsked } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { todayOf } from '../services/estates.ts';
import { chooseAlcoholMethod } from '../services/lots/alcoholMethod.ts';
import { listTanks, lotsBoard } from '../services/lots/board.ts';
import { newSuggestion } from '../../shared/contracts/suggestions.ts';
import { listCapacities, setCapacity } from '../services/lots/capacities.ts';
import { changeLot, changeTank, confirmLot, createLot, createTank, deleteLot, setLotParts } from '../services/lots/changeLots.ts';
import { listDecisions } from '../services/lots/decisions.ts';
import { moveZone } from '../services/lots/moveZone.ts';
import { applyScenario, copyScenario, deleteScenario } from '../services/lots/scenarios.ts';
import { suggestScenario } from '../services/lots/suggest.ts';
import { blockRipening } from '../services/results/ripening.ts';
import { zoneResults } from '../services/results/zoneResults.ts';
import { versionMatched } from './etag.ts';

const today = (request: Request) => todayOf(accessOf(request), new Date());

/** Results by zone, pick lots, what-ifs and tanks. Writes on a lot name its version in If-Match. */
export function lotRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.get('/zonings/:zoningId/results', allow('results.see', 'read'), async (request, response) => {
    const { season } = ofSeason.parse(request.query);
    response.json(await zoneResults(accessOf(request), idParam(request, 'zoningId'), season ? { seasonId: season } : {}));
  });
  router.get('/blocks/:blockId/ripening', allow('results.see', 'read'), async (request, response) => {
    const { season, known, unchecked } = ripenessAsked.parse(request.query);
    response.json(await blockRipening(accessOf(request), idParam(request, 'blockId'), { today: await today(request), knownOn: known ?? null, unchecked, seasonId: season ?? null }));
  });

  router.get('/lots', allow('lots.see', 'read'), async (request, response) => {
    const { scenario, known } = boardAsked.parse(request.query);
    response.json(await lotsBoard(accessOf(request), { scenarioId: scenario ?? null, today: await today(request), knownOn: known ?? null }));
  });
  router.post('/lots', allow('lots.build', 'propose'), async (request, response) => {
    response.status(201).json(await createLot(accessOf(request), newLot.parse(request.body), await today(request)));
  });
  router.patch('/lots/:lotId', allow('lots.build', 'propose'), async (request, response) => {
    await changeLot(accessOf(request), idParam(request, 'lotId'), lotChange.parse(request.body), versionMatched(request));
    response.status(204).end();
  });
  router.put('/lots/:lotId/parts', allow('lots.build', 'propose'), async (request, response) => {
    await setLotParts(accessOf(request), idParam(request, 'lotId'), lotParts.parse(request.body), versionMatched(request));
    response.status(204).end();
  });
  router.post('/lot-moves', allow('lots.build', 'propose'), async (request, response) => {
    await moveZone(accessOf(request), zoneMove.parse(request.body));
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
  router.post('/scenarios/:scenarioId/apply', allow('lots.build'), async (request, response) => {
    response.json(await applyScenario(accessOf(request), idParam(request, 'scenarioId')));
  });
  router.delete('/scenarios/:scenarioId', allow('lots.build'), async (request, response) => {
    await deleteScenario(accessOf(request), idParam(request, 'scenarioId'));
    response.status(204).end();
  });
  router.post('/lot-suggestions', allow('lots.build', 'propose'), async (request, response) => {
    response.status(201).json(await suggestScenario(accessOf(request), newSuggestion.parse(request.body), { today: await today(request) }));
  });
  router.get('/lots/:lotId/decisions', allow('lots.see', 'read'), async (request, response) => {
    const items = await listDecisions(accessOf(request), idParam(request, 'lotId'));
    response.json({ items, total: items.length });
  });
  router.get('/day-capacities', allow('lots.see', 'read'), async (request, response) => {
    const items = await listCapacities(accessOf(request), knownOn.parse(request.query).known ?? null);
    response.json({ items, total: items.length });
  });
  router.put('/day-capacities', allow('lots.build', 'propose'), async (request, response) => {
    await setCapacity(accessOf(request), dayCapacity.parse(request.body));
    response.status(204).end();
  });

  router.put('/alcohol-method', allow('lots.confirm'), async (request, response) => {
    await chooseAlcoholMethod(accessOf(request), alcoholChoice.parse(request.body).method);
    response.status(204).end();
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
