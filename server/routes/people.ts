import { Router } from 'express';
import { newInvitation, rolesChange } from '../../shared/contracts/people.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import type { LinkAddress } from '../access/linkAddress.ts';
import { invite, listInvitations, resendInvitation, revokeInvitation } from '../services/people/invitations.ts';
import { changeRoles, listPeople } from '../services/people/people.ts';

/** People of the estate, their roles, and invitations. */
export function peopleRoutes(options: { links: LinkAddress }): Router {
  const router = Router({ mergeParams: true });
  router.get('/people', allow('people.see', 'read'), async (request, response) => {
    const items = await listPeople(accessOf(request), new Date().toISOString().slice(0, 10));
    response.json({ items, total: items.length });
  });
  router.put('/people/:personId/roles', allow('people.manage', 'propose'), async (request, response) => {
    await changeRoles(accessOf(request), idParam(request, 'personId'), rolesChange.parse(request.body), new Date());
    response.status(204).end();
  });
  router.get('/invitations', allow('people.see', 'read'), async (request, response) => {
    const items = await listInvitations(accessOf(request), new Date());
    response.json({ items, total: items.length });
  });
  router.post('/invitations', allow('people.manage', 'propose'), async (request, response) => {
    const made = await invite(accessOf(request), newInvitation.parse(request.body), { publicUrl: options.links.forMail(request), now: new Date() });
    response.status(201).json(made);
  });
  router.post('/invitations/:invitationId/resend', allow('people.manage', 'propose'), async (request, response) => {
    await resendInvitation(accessOf(request), idParam(request, 'invitationId'), { publicUrl: options.links.forMail(request), now: new Date() });
    response.status(204).end();
  });
  router.delete('/invitations/:invitationId', allow('people.manage', 'propose'), async (request, response) => {
    await revokeInvitation(accessOf(request), idParam(request, 'invitationId'), new Date());
    response.status(204).end();
  });
  return router;
}
