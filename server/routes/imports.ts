import { Router, type Request, type RequestHandler } from 'express';
import { pipeline } from 'node:stream/promises';
import { arrivedUploads, importPatch, outlinesTaken } from '../../shared/contracts/imports.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { answerImport } from '../services/imports/answer.ts';
import { dismissImport, openOriginal } from '../services/imports/keep.ts';
import { takeOutlines } from '../services/imports/outlines.ts';
import { receiveFiles } from '../services/imports/receive.ts';
import { listImports, viewImport } from '../services/imports/view.ts';
import { takePieces, type PiecesReceiver } from '../storage/resumable.ts';
import { uploadsOf } from '../storage/uploads.ts';

/** Files: received, asked about, taken over, and given back byte for byte. */
export function importRoutes(options: { receive: RequestHandler; receiveInPieces: PiecesReceiver }): Router {
  const router = Router({ mergeParams: true });

  router.get('/imports', allow('layers.import', 'read'), async (request, response) => {
    const items = await listImports(accessOf(request));
    response.json({ items, total: items.length });
  });

  router.post('/imports', allow('layers.import'), options.receive, async (request, response) => {
    const items = await receiveFiles(accessOf(request), uploadsOf(request.files));
    response.status(201).json({ items, total: items.length });
  });

  router.use('/imports/pieces', allow('layers.import'), (request, response) => options.receiveInPieces(request, response, ownerOf(request)));

  router.post('/imports/arrived', allow('layers.import'), async (request, response) => {
    const items = await receiveFiles(accessOf(request), await takePieces(ownerOf(request), arrivedUploads.parse(request.body).uploads));
    response.status(201).json({ items, total: items.length });
  });

  router.get('/imports/:importId', allow('layers.import', 'read'), async (request, response) => {
    response.json(await viewImport(accessOf(request), idParam(request, 'importId')));
  });

  router.patch('/imports/:importId', allow('layers.import'), async (request, response) => {
    response.json(await answerImport(accessOf(request), idParam(request, 'importId'), importPatch.parse(request.body).answers));
  });

  router.post('/imports/:importId/blocks', allow('blocks.edit'), async (request, response) => {
    const items = await takeOutlines(accessOf(request), idParam(request, 'importId'), outlinesTaken.parse(request.body), new Date());
    response.status(201).json({ items, total: items.length });
  });

  router.delete('/imports/:importId', allow('layers.import'), async (request, response) => {
    await dismissImport(accessOf(request), idParam(request, 'importId'), new Date());
    response.status(204).end();
  });

  router.get('/files/:fileId/download', allow('layers.import', 'read'), async (request, response) => {
    const { name, bytes, sha256, stream } = await openOriginal(accessOf(request), idParam(request, 'fileId'));
    response.attachment(name).set({ 'content-type': 'application/octet-stream', 'content-length': String(bytes), etag: `"${sha256}"`, 'cache-control': 'private, no-transform' });
    await pipeline(stream, response);
  });

  return router;
}

/** An unfinished upload belongs to one person in one estate. */
function ownerOf(request: Request): string {
  const { estateId, personId } = accessOf(request);
  return `${estateId}.${personId}`;
}
