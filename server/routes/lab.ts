import { Router, type RequestHandler } from 'express';
import { pipeline } from 'node:stream/promises';
import { exclusionRequest, labFileAnswers, labFileStore, labResultBatch, stateChange } from '../../shared/contracts/lab.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { labBench } from '../services/lab/bench.ts';
import { answerLabFile, dismissLabFile, listLabFiles, receiveLabFile, viewLabFile } from '../services/lab/labFiles.ts';
import { openLabOriginal } from '../services/lab/original.ts';
import { recordResults } from '../services/lab/recordResults.ts';
import { excludeResult, setResultState } from '../services/lab/settleResults.ts';
import { storeLabFile } from '../services/lab/storeLabFile.ts';
import { uploadsOf } from '../storage/uploads.ts';

/** The lab's bench: figures typed or read from files, checked, and left out only with a reason. */
export function labRoutes(options: { receive: RequestHandler }): Router {
  const router = Router({ mergeParams: true });
  const see = allow('lab.enter', 'read');
  router.get('/lab', see, async (request, response) => {
    response.json(await labBench(accessOf(request), new Date()));
  });
  router.post('/lab/results', allow('lab.enter'), async (request, response) => {
    response.json({ outcomes: await recordResults(accessOf(request), labResultBatch.parse(request.body), new Date()) });
  });
  router.put('/lab/results/state', allow('results.check'), async (request, response) => {
    await setResultState(accessOf(request), stateChange.parse(request.body), new Date());
    response.status(204).end();
  });
  router.put('/lab/results/:resultId/exclusion', allow('outliers.exclude', 'propose'), async (request, response) => {
    response.json(await excludeResult(accessOf(request), idParam(request, 'resultId'), exclusionRequest.parse(request.body).reason, new Date()));
  });
  router.get('/lab/files', see, async (request, response) => {
    const items = await listLabFiles(accessOf(request));
    response.json({ items, total: items.length });
  });
  router.post('/lab/files', allow('lab.enter'), options.receive, async (request, response) => {
    response.status(201).json(await receiveLabFile(accessOf(request), uploadsOf(request.files), new Date()));
  });
  router.get('/lab/files/:fileId', see, async (request, response) => {
    response.json(await viewLabFile(accessOf(request), idParam(request, 'fileId'), new Date()));
  });
  router.patch('/lab/files/:fileId', allow('lab.enter'), async (request, response) => {
    response.json(await answerLabFile(accessOf(request), idParam(request, 'fileId'), labFileAnswers.parse(request.body).answers, new Date()));
  });
  router.post('/lab/files/:fileId/store', allow('lab.enter'), async (request, response) => {
    response.json(await storeLabFile(accessOf(request), idParam(request, 'fileId'), labFileStore.parse(request.body), new Date()));
  });
  router.delete('/lab/files/:fileId', allow('lab.enter'), async (request, response) => {
    await dismissLabFile(accessOf(request), idParam(request, 'fileId'));
    response.status(204).end();
  });
  router.get('/lab/files/:fileId/original', see, async (request, response) => {
    const { name, bytes, stream } = await openLabOriginal(accessOf(request), idParam(request, 'fileId'));
    response.attachment(name).set({ 'content-type': 'application/octet-stream', 'content-length': String(bytes), 'cache-control': 'private, no-transform' });
    await pipeline(stream, response);
  });
  return router;
}
