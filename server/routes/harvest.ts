import { Router, type Request } from 'express';
import { newNotice } from '../../shared/contracts/notices.ts';
import { factorSwitch, newCellarResult } from '../../shared/contracts/factors.ts';
import { newTicket, ticketFile } from '../../shared/contracts/tickets.ts';
import { knownOn, letterPaper } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import type { LinkAddress } from '../access/linkAddress.ts';
import { enterCellarResult, listCellarResults, listFactors, switchFactor } from '../services/lots/cellar.ts';
import { listNotices, noticePeople, noticeState, printNotice, readNotice, sendNotice } from '../services/lots/notices.ts';
import { seasonLetter } from '../services/lots/letter.ts';
import { todayOf } from '../services/estates.ts';
import { reopenLot } from '../services/lots/reopenLot.ts';
import { seasonReview } from '../services/lots/review.ts';
import { enterTicket, importTickets, listTickets } from '../services/lots/tickets.ts';
import { versionMatched } from './etag.ts';

const today = (request: Request) => todayOf(accessOf(request), new Date());

/** Whether a notice on paper still holds; open to whoever has the paper, by its unguessable code. */
export function noticeStateRoutes(): Router {
  const router = Router();
  router.get('/notice-state/:code', async (request, response) => {
    response.set('cache-control', 'no-store').json(await noticeState(idParam(request, 'code'), new Date()));
  });
  return router;
}

/** Pick notices, scale tickets and the season's review. Notices and tickets are never changed, only replaced. */
export function harvestRoutes(options: { links: LinkAddress }): Router {
  const router = Router({ mergeParams: true });

  router.get('/notices', allow('notices.acknowledge'), async (request, response) => {
    const { known } = knownOn.parse(request.query);
    const items = await listNotices(accessOf(request), { today: await today(request), knownOn: known ?? null });
    response.json({ items, total: items.length });
  });
  router.get('/notice-people', allow('notices.send'), async (request, response) => {
    const items = await noticePeople(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/lots/:lotId/reopen', allow('lots.confirm'), async (request, response) => {
    const publicUrl = options.links.forMail(request);
    await reopenLot(accessOf(request), idParam(request, 'lotId'), versionMatched(request), { publicUrl, now: new Date() });
    response.status(204).end();
  });
  router.post('/lots/:lotId/notices', allow('notices.send'), async (request, response) => {
    const publicUrl = options.links.forMail(request);
    response.status(201).json(await sendNotice(accessOf(request), idParam(request, 'lotId'), newNotice.parse(request.body), { publicUrl, now: new Date() }));
  });
  router.post('/notices/:noticeId/read', allow('notices.acknowledge'), async (request, response) => {
    await readNotice(accessOf(request), idParam(request, 'noticeId'), new Date());
    response.status(204).end();
  });
  router.get('/notices/:noticeId/sheet', allow('notices.acknowledge'), async (request, response) => {
    const publicUrl = options.links.forPaper(request);
    const { name, body } = await printNotice(accessOf(request), idParam(request, 'noticeId'), { publicUrl, now: new Date() });
    response.type('application/pdf').attachment(name).send(body);
  });

  router.get('/tickets', allow('lots.see', 'read'), async (request, response) => {
    const items = await listTickets(accessOf(request), await today(request));
    response.json({ items, total: items.length });
  });
  router.post('/tickets', allow('tickets.enter'), async (request, response) => {
    response.status(201).json(await enterTicket(accessOf(request), newTicket.parse(request.body), new Date()));
  });
  router.post('/tickets/import', allow('tickets.enter'), async (request, response) => {
    response.json(await importTickets(accessOf(request), ticketFile.parse(request.body), { today: await today(request), now: new Date() }));
  });
  router.get('/cellar-results', allow('lots.see', 'read'), async (request, response) => {
    const items = await listCellarResults(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/lots/:lotId/cellar-results', allow('tickets.enter'), async (request, response) => {
    response.status(201).json(await enterCellarResult(accessOf(request), idParam(request, 'lotId'), newCellarResult.parse(request.body), new Date()));
  });
  router.get('/factors', allow('lots.see', 'read'), async (request, response) => {
    const items = await listFactors(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.put('/factors', allow('factors.switch'), async (request, response) => {
    await switchFactor(accessOf(request), factorSwitch.parse(request.body), new Date());
    response.status(204).end();
  });

  router.get('/blocks/:blockId/season-letter', allow('review.see'), async (request, response) => {
    const { size } = letterPaper.parse(request.query);
    const { name, body } = await seasonLetter(accessOf(request), idParam(request, 'blockId'), { size, today: await today(request), now: new Date() });
    response.type('application/pdf').attachment(name).send(body);
  });
  router.get('/review', allow('review.see', 'read'), async (request, response) => {
    response.json(await seasonReview(accessOf(request), { today: await today(request) }));
  });
  return router;
}
