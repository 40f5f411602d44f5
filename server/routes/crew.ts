import { Router } from 'express';
import { lossReport, newCrewPerson, newPin, phoneState } from '../../shared/contracts/phones.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { crewCodeState, endCrewCode, makeCrewCode } from '../services/crew/crewCode.ts';
import { addCrewPerson, setPin } from '../services/crew/crewPin.ts';
import { checkIn, listPhones, reportLost } from '../services/crew/phones.ts';

/** Shared phones: the crew code, PINs, and how the phones of the estate stand. */
export function crewRoutes(): Router {
  const router = Router({ mergeParams: true });
  const managers = allow('people.manage', 'propose');

  router.get('/crew-code', managers, async (request, response) => {
    response.json(await crewCodeState(accessOf(request), new Date()));
  });
  router.post('/crew-code', managers, async (request, response) => {
    response.status(201).json(await makeCrewCode(accessOf(request), new Date()));
  });
  router.delete('/crew-code', managers, async (request, response) => {
    await endCrewCode(accessOf(request), new Date());
    response.status(204).end();
  });
  router.post('/crew', managers, async (request, response) => {
    response.status(201).json(await addCrewPerson(accessOf(request), newCrewPerson.parse(request.body)));
  });
  router.put('/crew/:personId/pin', managers, async (request, response) => {
    await setPin(accessOf(request), idParam(request, 'personId'), newPin.parse(request.body).pin);
    response.status(204).end();
  });
  router.get('/phones', managers, async (request, response) => {
    const items = await listPhones(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/phones/check-in', allow('readings.record', 'own'), async (request, response) => {
    response.json(await checkIn(accessOf(request), phoneState.parse(request.body), new Date()));
  });
  router.put('/phones/:phoneId/loss', managers, async (request, response) => {
    await reportLost(accessOf(request), idParam(request, 'phoneId'), { ...lossReport.parse(request.body), now: new Date() });
    response.status(204).end();
  });
  return router;
}
