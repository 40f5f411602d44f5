import { Router } from 'express';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { cancelJob, readJob } from '../services/jobs.ts';
import { inLanguageOf } from './language.ts';

const pollMs = 300;
const finished = new Set(['done', 'failed', 'cancelled']);

/** Progress of background work: read once, or followed as server-sent events. */
export function jobRoutes(): Router {
  const router = Router({ mergeParams: true });

  router.get('/jobs/:jobId', allow('estate.see', 'read'), async (request, response) => {
    response.json(inLanguageOf(request, await readJob(accessOf(request), idParam(request, 'jobId'))));
  });

  router.delete('/jobs/:jobId', allow('zoning.run', 'propose'), async (request, response) => {
    response.json(inLanguageOf(request, await cancelJob(accessOf(request), idParam(request, 'jobId'), new Date())));
  });

  router.get('/jobs/:jobId/events', allow('estate.see', 'read'), async (request, response) => {
    const access = accessOf(request);
    const jobId = idParam(request, 'jobId');
    await readJob(access, jobId);
    response.writeHead(200, { 'content-type': 'text/event-stream', 'cache-control': 'no-store', 'x-accel-buffering': 'no' });
    let open = true;
    request.on('close', () => (open = false));
    let last = '';
    while (open) {
      const job = inLanguageOf(request, await readJob(access, jobId));
      const text = JSON.stringify(job);
      if (text !== last) response.write(`data: ${text}\n\n`);
      last = text;
      if (finished.has(job.state)) break;
      await new Promise((resolve) => setTimeout(resolve, pollMs));
    }
    response.end();
  });

  return router;
}
