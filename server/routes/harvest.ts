import { Router } from 'express';
import { newNotice } from '../../shared/contracts/notices.ts';
import { newTicket } from '../../shared/contracts/tickets.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { listNotices, noticePeople, readNotice, sendNotice } from '../services/lots/notices.ts';
import { seasonReview } from '../services/lots/review.ts';
import { enterTicket, listTickets } from '../services/lots/tickets.ts';

/** Pick notices, scale tickets and the season's review. Notices and tickets are never changed, only replaced. */
export function harvestRoutes(options: { publicUrl: (host: string) => string }): Router {
  const router = Router({ mergeParams: true });

  router.get('/notices', allow('notices.acknowledge'), async (request, response) => {
    const items = await listNotices(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.get('/notice-people', allow('notices.send'), async (request, response) => {
    const items = await noticePeople(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/lots/:lotId/notices', allow('notices.send'), async (request, response) => {
    const publicUrl = options.publicUrl(request.get('host') ?? 'localhost');
    response.status(201).json(await sendNotice(accessOf(request), idParam(request, 'lotId'), newNotice.parse(request.body), { publicUrl, now: new Date() }));
  });
  router.post('/notices/:noticeId/read', allow('notices.acknowledge'), async (request, response) => {
    await readNotice(accessOf(request), idParam(request, 'noticeId'), new Date());
    response.status(204).end();
  });

  router.get('/tickets', allow('lots.see', 'read'), async (request, response) => {
    const items = await listTickets(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/tickets', allow('tickets.enter'), async (request, response) => {
    response.status(201).json(await enterTicket(accessOf(request), newTicket.parse(request.body), new Date()));
  });

  router.get('/review', allow('review.see', 'read'), async (request, response) => {
    response.json(await seasonReview(accessOf(request), { today: new Date().toISOString().slice(0, 10) }));
  });
  return router;
}
