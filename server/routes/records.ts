import { Router } from 'express';
import { z } from 'zod';
import { id } from '../../shared/contracts/common.ts';
import { accessOf, allow } from '../access/guard.ts';
import { listAudit, listMail } from '../services/records.ts';

const page = z.object({ before: z.coerce.number().int().positive().optional(), subject: id.optional() });

/** What was done here and what was written to whom. */
export function recordRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/audit', allow('audit.see', 'read'), async (request, response) => {
    const { before = null, subject = null } = page.parse(request.query);
    response.json(await listAudit(accessOf(request), { before, subject }));
  });
  router.get('/mail', allow('mail.see'), async (request, response) => {
    response.json(await listMail(accessOf(request)));
  });
  return router;
}
