import { Router } from 'express';
import { newZoning, publishRequest, revisionOnly, zoneEditRequest, zoningChange } from '../../shared/contracts/zonings.ts';
import { comparedWith, ofBlock, shownZones, zonesExport, zonesReport } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { readDoubt } from '../services/zonings/doubt.ts';
import { editZones, keepAsDraft, listEdits, restoreAsDraft, stepEdits } from '../services/zonings/editZones.ts';
import { exportZones } from '../services/zonings/exportZones.ts';
import { liveZones } from '../services/zonings/liveZones.ts';
import { viewMemberships } from '../services/zonings/memberships.ts';
import { nameZoning } from '../services/zonings/nameZoning.ts';
import { todayOf } from '../services/estates.ts';
import { keepPresence } from '../services/zonings/presence.ts';
import { compareZonings, publishEffects, publishZones } from '../services/zonings/publish.ts';
import { reportZoning } from '../services/zonings/reportZoning.ts';
import { requestZoning } from '../services/zonings/request.ts';
import { compareSeasons } from '../services/zonings/seasons.ts';
import { listZonings, readLabels, viewZoning } from '../services/zonings/view.ts';
import { inLanguageOf, languageOf } from './language.ts';

/** Zonings: asked for, read, kept as a draft, changed by hand, published. */
export function zoningRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.post('/blocks/:blockId/zonings', allow('zoning.run', 'propose'), async (request, response) => {
    const made = await requestZoning(accessOf(request), idParam(request, 'blockId'), newZoning.parse(request.body), await todayOf(accessOf(request), new Date()));
    response.status(202).json(made);
  });
  router.get('/blocks/:blockId/zonings', allow('estate.see', 'read'), async (request, response) => {
    const items = await listZonings(accessOf(request), idParam(request, 'blockId'));
    response.json({ items, total: items.length });
  });
  router.get('/zonings', allow('estate.see', 'read'), async (request, response) => {
    const items = await listZonings(accessOf(request), ofBlock.parse(request.query).block ?? null);
    response.json({ items, total: items.length });
  });
  router.get('/zones', allow('estate.see', 'read'), async (request, response) => {
    response.json(await liveZones(accessOf(request)));
  });
  router.get('/zonings/:zoningId', allow('estate.see', 'read'), async (request, response) => {
    response.json(inLanguageOf(request, await viewZoning(accessOf(request), idParam(request, 'zoningId'), shownZones.parse(request.query).zones ?? null)));
  });
  router.get('/zonings/:zoningId/labels', allow('estate.see', 'read'), async (request, response) => {
    const { labels, gridKey } = await readLabels(accessOf(request), idParam(request, 'zoningId'), shownZones.parse(request.query).zones ?? null);
    response.set('x-grid-key', gridKey).type('application/octet-stream').send(Buffer.from(labels));
  });
  router.get('/zonings/:zoningId/doubt', allow('estate.see', 'read'), async (request, response) => {
    response.json(await readDoubt(accessOf(request), idParam(request, 'zoningId'), shownZones.parse(request.query).zones ?? null));
  });
  router.get('/zonings/:zoningId/memberships', allow('estate.see', 'read'), async (request, response) => {
    response.json(await viewMemberships(accessOf(request), idParam(request, 'zoningId'), shownZones.parse(request.query).zones ?? null));
  });
  router.get('/zonings/:zoningId/seasons', allow('estate.see', 'read'), async (request, response) => {
    response.json(await compareSeasons(accessOf(request), idParam(request, 'zoningId')));
  });
  router.post('/zonings/:zoningId/presence', allow('zones.edit', 'propose'), async (request, response) => {
    response.json(await keepPresence(accessOf(request), idParam(request, 'zoningId'), new Date()));
  });
  router.patch('/zonings/:zoningId', allow('zones.edit', 'propose'), async (request, response) => {
    const { name, chosenZones, revision } = zoningChange.parse(request.body);
    const zoningId = idParam(request, 'zoningId');
    if (name !== undefined) await nameZoning(accessOf(request), zoningId, name);
    if (chosenZones !== undefined) await keepAsDraft(accessOf(request), zoningId, chosenZones, revision);
    response.json(await viewZoning(accessOf(request), zoningId, null));
  });
  router.get('/zonings/:zoningId/edits', allow('estate.see', 'read'), async (request, response) => {
    const items = await listEdits(accessOf(request), idParam(request, 'zoningId'));
    response.json({ items, total: items.length });
  });
  router.post('/zonings/:zoningId/edits', allow('zones.edit', 'propose'), async (request, response) => {
    await editZones(accessOf(request), idParam(request, 'zoningId'), zoneEditRequest.parse(request.body));
    response.status(201).json(await viewZoning(accessOf(request), idParam(request, 'zoningId'), null));
  });
  for (const step of ['undo', 'redo'] as const) {
    router.post(`/zonings/:zoningId/${step}`, allow('zones.edit', 'propose'), async (request, response) => {
      await stepEdits(accessOf(request), idParam(request, 'zoningId'), { step, ...revisionOnly.parse(request.body) });
      response.json(await viewZoning(accessOf(request), idParam(request, 'zoningId'), null));
    });
  }
  router.get('/zonings/:zoningId/effects', allow('zones.edit', 'propose'), async (request, response) => {
    response.json(await publishEffects(accessOf(request), idParam(request, 'zoningId')));
  });
  router.get('/zonings/:zoningId/compare', allow('estate.see', 'read'), async (request, response) => {
    const { with: otherId, zones = null } = comparedWith.parse(request.query);
    response.json(await compareZonings(accessOf(request), idParam(request, 'zoningId'), { otherId, zones }));
  });
  router.get('/zonings/:zoningId/export', allow('exports.make'), async (request, response) => {
    const { format, zones = null } = zonesExport.parse(request.query);
    const file = await exportZones(accessOf(request), idParam(request, 'zoningId'), { format, zones, language: languageOf(request) });
    // What a name ends in is no kind that every server knows: the format's own comes last.
    response.attachment(file.name).set('content-type', file.type).send(file.body);
  });
  router.get('/zonings/:zoningId/report', allow('exports.make'), async (request, response) => {
    const { size, zones = null } = zonesReport.parse(request.query);
    const file = await reportZoning(accessOf(request), idParam(request, 'zoningId'), { size, zones, now: new Date() });
    response.type('application/pdf').attachment(file.name).send(file.body);
  });
  router.post('/zonings/:zoningId/publish', allow('zones.publish'), async (request, response) => {
    await publishZones(accessOf(request), idParam(request, 'zoningId'), { ...publishRequest.parse(request.body), now: new Date() });
    response.json(await viewZoning(accessOf(request), idParam(request, 'zoningId'), null));
  });
  router.post('/zonings/:zoningId/restore', allow('zones.restore', 'propose'), async (request, response) => {
    response.status(201).json(await restoreAsDraft(accessOf(request), idParam(request, 'zoningId'), await todayOf(accessOf(request), new Date())));
  });
  return router;
}
