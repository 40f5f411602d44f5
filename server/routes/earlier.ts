import { Router, type RequestHandler } from 'express';
import { pipeline } from 'node:stream/promises';
import { earlierStore, earlierTakeBack } from '../../shared/contracts/earlier.ts';
import { labFileAnswers } from '../../shared/contracts/lab.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { answerEarlierFile, dismissEarlierFile, listEarlierFiles, receiveEarlierFile, viewEarlierFile } from '../services/earlier/files.ts';
import { storeEarlierFile } from '../services/earlier/store.ts';
import { openEarlierOriginal, takeBackEarlierFile } from '../services/earlier/takeBack.ts';
import { uploadsOf } from '../storage/uploads.ts';

/** Readings of earlier visits out of a table: read, asked about, stored at once, taken back as a whole. */
export function earlierRoutes(options: { receive: RequestHandler }): Router {
  const router = Router({ mergeParams: true });
  const may = allow('readings.import');
  router.get('/earlier-readings', may, async (request, response) => {
    const items = await listEarlierFiles(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/earlier-readings', may, options.receive, async (request, response) => {
    response.status(201).json(await receiveEarlierFile(accessOf(request), uploadsOf(request.files), new Date()));
  });
  router.get('/earlier-readings/:earlierFileId', may, async (request, response) => {
    response.json(await viewEarlierFile(accessOf(request), idParam(request, 'earlierFileId'), new Date()));
  });
  router.patch('/earlier-readings/:earlierFileId', may, async (request, response) => {
    response.json(await answerEarlierFile(accessOf(request), idParam(request, 'earlierFileId'), labFileAnswers.parse(request.body).answers, new Date()));
  });
  router.post('/earlier-readings/:earlierFileId/store', may, async (request, response) => {
    response.json(await storeEarlierFile(accessOf(request), idParam(request, 'earlierFileId'), earlierStore.parse(request.body), new Date()));
  });
  router.post('/earlier-readings/:earlierFileId/take-back', may, async (request, response) => {
    response.json(await takeBackEarlierFile(accessOf(request), idParam(request, 'earlierFileId'), earlierTakeBack.parse(request.body).reason, new Date()));
  });
  router.delete('/earlier-readings/:earlierFileId', may, async (request, response) => {
    await dismissEarlierFile(accessOf(request), idParam(request, 'earlierFileId'));
    response.status(204).end();
  });
  router.get('/earlier-readings/:earlierFileId/original', may, async (request, response) => {
    const { name, bytes, stream } = await openEarlierOriginal(accessOf(request), idParam(request, 'earlierFileId'));
    response.attachment(name).set({ 'content-type': 'application/octet-stream', 'content-length': String(bytes), 'cache-control': 'private, no-transform' });
    await pipeline(stream, response);
  });
  return router;
}
