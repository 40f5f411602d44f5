import { Router } from 'express';
import { newDay, newRound, roundChange } from '../../shared/contracts/rounds.ts';
import { requireReach } from '../access/access.ts';
import { blankLabels, crewSheet, daySheet, ofBlockOrPlan, roundLabels, whoseWalk } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import type { LinkAddress } from '../access/linkAddress.ts';
import { acknowledgeRound, changeRound } from '../services/rounds/changeRound.ts';
import { fieldRound } from '../services/rounds/fieldRound.ts';
import { listRounds } from '../services/rounds/listRounds.ts';
import { makeRound } from '../services/rounds/makeRound.ts';
import { printBlankLabels, printLabels } from '../services/rounds/printLabels.ts';
import { printDay } from '../services/rounds/printDay.ts';
import { printSheet } from '../services/rounds/printSheet.ts';
import { sendDay } from '../services/rounds/sendDay.ts';

/** Rounds: a plan's vines sent to people for a day. Crew see their own. */
export function roundRoutes(options: { links: LinkAddress }): Router {
  const router = Router({ mergeParams: true });
  const own = allow('readings.record', 'own');

  router.post('/plans/day/rounds', allow('rounds.assign'), async (request, response) => {
    const publicUrl = options.links.forMail(request);
    response.status(201).json(await sendDay(accessOf(request), newDay.parse(request.body), { publicUrl }));
  });
  router.post('/plans/:planId/rounds', allow('rounds.assign'), async (request, response) => {
    const publicUrl = options.links.forMail(request);
    response.status(201).json(await makeRound(accessOf(request), idParam(request, 'planId'), newRound.parse(request.body), { publicUrl }));
  });
  router.get('/rounds/day-sheet', allow('sheets.print', 'own'), async (request, response) => {
    const { name, body } = await printDay(accessOf(request), { ...daySheet.parse(request.query), now: new Date() });
    response.set('content-type', 'application/pdf').attachment(name).send(body);
  });
  router.get('/rounds', own, async (request, response) => {
    const { block, plan } = ofBlockOrPlan.parse(request.query);
    const items = await listRounds(accessOf(request), { ...(block ? { blockId: block } : {}), ...(plan ? { planId: plan } : {}) });
    response.json({ items, total: items.length });
  });
  router.get('/rounds/:roundId', own, async (request, response) => {
    const { person } = whoseWalk.parse(request.query);
    const access = accessOf(request);
    if (person !== undefined && person !== access.personId) requireReach(access, 'readings.record');
    response.json(await fieldRound(person === undefined ? access : { ...access, personId: person }, idParam(request, 'roundId'), new Date()));
  });
  router.patch('/rounds/:roundId', own, async (request, response) => {
    await changeRound(accessOf(request), idParam(request, 'roundId'), roundChange.parse(request.body), new Date());
    response.status(204).end();
  });
  router.post('/rounds/:roundId/acknowledge', allow('notices.acknowledge'), async (request, response) => {
    await acknowledgeRound(accessOf(request), idParam(request, 'roundId'), new Date());
    response.status(204).end();
  });
  router.get('/rounds/:roundId/sheet', allow('sheets.print', 'own'), async (request, response) => {
    const { paper } = crewSheet.parse(request.query);
    const publicUrl = options.links.forPaper(request);
    const { name, body } = await printSheet(accessOf(request), idParam(request, 'roundId'), { paper, publicUrl, now: new Date() });
    response.set('content-type', 'application/pdf').attachment(name).send(body);
  });
  router.post('/rounds/:roundId/labels', allow('sheets.print', 'own'), async (request, response) => {
    const { name, body } = await printLabels(accessOf(request), idParam(request, 'roundId'), { ...roundLabels.parse(request.query), now: new Date() });
    response.set('content-type', 'application/pdf').attachment(name).send(body);
  });
  router.post('/labels', allow('sheets.print', 'own'), async (request, response) => {
    const { name, body } = await printBlankLabels(accessOf(request), blankLabels.parse(request.query));
    response.set('content-type', 'application/pdf').attachment(name).send(body);
  });
  return router;
}
