import { Router } from 'express';
import { cleaningChange, layerChange, overrideChange } from '../../shared/contracts/layers.ts';
import { oneBlock } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { layersBeside } from '../services/layers/beside.ts';
import { readCells, readMarks, readRelief } from '../services/layers/cells.ts';
import { changeLayer, overrideLayer, retireLayer } from '../services/layers/change.ts';
import { changeCleaning, readAside } from '../services/layers/survey.ts';
import { listLayers } from '../services/layers/view.ts';

/** Layers on blocks: what they hold, how far they may be trusted, and their cells. */
export function layerRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.get('/blocks/:blockId/layers', allow('estate.see', 'read'), async (request, response) => {
    const items = await listLayers(accessOf(request), idParam(request, 'blockId'));
    response.json({ items, total: items.length });
  });

  router.get('/relief', allow('estate.see', 'read'), async (request, response) => {
    response.json(await readRelief(accessOf(request)));
  });

  router.get('/layers/:layerId/cells', allow('estate.see', 'read'), async (request, response) => {
    const { bytes, grid } = await readCells(accessOf(request), idParam(request, 'layerId'), oneBlock.parse(request.query).block);
    response.set({ 'content-type': 'application/octet-stream', 'x-grid': JSON.stringify(grid), 'cache-control': 'private, no-cache' }).send(bytes);
  });

  router.get('/layers/:layerId/marks', allow('estate.see', 'read'), async (request, response) => {
    const bytes = await readMarks(accessOf(request), idParam(request, 'layerId'), oneBlock.parse(request.query).block);
    if (bytes === null) response.status(204).end();
    else response.set({ 'content-type': 'application/octet-stream', 'cache-control': 'private, no-cache' }).send(bytes);
  });

  router.patch('/layers/:layerId', allow('layers.import'), async (request, response) => {
    await changeLayer(accessOf(request), idParam(request, 'layerId'), layerChange.parse(request.body));
    response.status(204).end();
  });

  router.get('/layers/:layerId/aside', allow('estate.see', 'read'), async (request, response) => {
    const items = await readAside(accessOf(request), idParam(request, 'layerId'), oneBlock.parse(request.query).block);
    response.json({ items, total: items.length });
  });

  router.get('/layers/:layerId/beside', allow('estate.see', 'read'), async (request, response) => {
    const items = await layersBeside(accessOf(request), idParam(request, 'layerId'), oneBlock.parse(request.query).block);
    response.json({ items, total: items.length });
  });

  router.put('/layers/:layerId/cleaning', allow('layers.import'), async (request, response) => {
    const jobId = await changeCleaning(accessOf(request), idParam(request, 'layerId'), cleaningChange.parse(request.body));
    response.status(202).json({ jobId });
  });

  router.post('/layers/:layerId/override', allow('layers.override'), async (request, response) => {
    await overrideLayer(accessOf(request), idParam(request, 'layerId'), overrideChange.parse(request.body), new Date());
    response.status(204).end();
  });

  router.delete('/layers/:layerId', allow('layers.import'), async (request, response) => {
    await retireLayer(accessOf(request), idParam(request, 'layerId'), new Date());
    response.status(204).end();
  });

  return router;
}
