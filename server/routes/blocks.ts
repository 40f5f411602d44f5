import { Router } from 'express';
import { blockChange, newBlock, outlineToCheck } from '../../shared/contracts/blocks.ts';
import { censusChange, numberingChange } from '../../shared/contracts/rows.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { changeCensus } from '../services/blocks/census.ts';
import { changeBlock, createBlock, previewOutline, retireBlock } from '../services/blocks/change.ts';
import { listBlocks } from '../services/blocks/list.ts';
import { listRows, renumber } from '../services/blocks/rows.ts';
import { viewBlock } from '../services/blocks/view.ts';
import { sendVersioned, versionMatched } from './etag.ts';

/** Blocks with their rows and vines. */
export function blockRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.get('/blocks', allow('estate.see', 'read'), async (request, response) => {
    const items = await listBlocks(accessOf(request), new Date());
    response.json({ items, total: items.length });
  });

  router.post('/blocks', allow('blocks.edit'), async (request, response) => {
    sendVersioned(response.status(201), await createBlock(accessOf(request), newBlock.parse(request.body), new Date()));
  });

  router.post('/blocks/check', allow('blocks.edit', 'propose'), async (request, response) => {
    response.json(await previewOutline(accessOf(request), outlineToCheck.parse(request.body)));
  });

  router.get('/blocks/:blockId', allow('estate.see', 'read'), async (request, response) => {
    const block = await viewBlock(accessOf(request), idParam(request, 'blockId'), { now: new Date() });
    sendVersioned(response, block);
  });

  router.patch('/blocks/:blockId', allow('blocks.edit'), async (request, response) => {
    const made = { version: versionMatched(request), now: new Date() };
    sendVersioned(response, await changeBlock(accessOf(request), idParam(request, 'blockId'), blockChange.parse(request.body), made));
  });

  router.delete('/blocks/:blockId', allow('blocks.edit'), async (request, response) => {
    await retireBlock(accessOf(request), idParam(request, 'blockId'), { version: versionMatched(request), now: new Date() });
    response.status(204).end();
  });

  router.get('/blocks/:blockId/rows', allow('estate.see', 'read'), async (request, response) => {
    const rows = await listRows(accessOf(request), idParam(request, 'blockId'));
    sendVersioned(response, rows);
  });

  router.put('/blocks/:blockId/rows', allow('rows.renumber'), async (request, response) => {
    const made = { version: versionMatched(request), now: new Date() };
    const rows = await renumber(accessOf(request), idParam(request, 'blockId'), numberingChange.parse(request.body), made);
    sendVersioned(response, rows);
  });

  router.put('/blocks/:blockId/vines', allow('census.edit', 'propose'), async (request, response) => {
    response.json(await changeCensus(accessOf(request), idParam(request, 'blockId'), censusChange.parse(request.body), new Date()));
  });

  return router;
}
