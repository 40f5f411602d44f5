import { Router } from 'express';
import { auditQuery } from '../../shared/contracts/records.ts';
import { accessOf, allow } from '../access/guard.ts';
import { listAudit, listMail } from '../services/records.ts';

/** What was done here and what was written to whom. */
export function recordRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/audit', allow('audit.see', 'read'), async (request, response) => {
    const { before = null, subject = null } = auditQuery.parse(request.query);
    response.json(await listAudit(accessOf(request), { before, subject }));
  });
  router.get('/mail', allow('mail.see'), async (request, response) => {
    response.json(await listMail(accessOf(request)));
  });
  return router;
}
