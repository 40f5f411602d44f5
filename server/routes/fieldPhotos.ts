import { Router, type RequestHandler } from 'express';
import { pipeline } from 'node:stream/promises';
import { ofBlock } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { keepPhoto, listPhotos, openPhoto } from '../services/photos/fieldPhotos.ts';
import { uploadsOf } from '../storage/uploads.ts';

/** Photos of vines: sent by phones, seen in the office, without place or device in the file. */
export function fieldPhotoRoutes(options: { receive: RequestHandler }): Router {
  const router = Router({ mergeParams: true });
  const own = allow('readings.record', 'own');
  router.get('/field-photos', own, async (request, response) => {
    const { block } = ofBlock.parse(request.query);
    const items = await listPhotos(accessOf(request), block ? { blockId: block } : {});
    response.json({ items, total: items.length });
  });
  router.post('/field-photos', own, options.receive, async (request, response) => {
    const { facts } = (request.body ?? {}) as { facts?: unknown };
    response.status(201).json(await keepPhoto(accessOf(request), facts, uploadsOf(request.files)));
  });
  router.get('/field-photos/:photoId', own, async (request, response) => {
    const { name, bytes, stream } = await openPhoto(accessOf(request), idParam(request, 'photoId'));
    response.set({ 'content-type': 'image/jpeg', 'content-length': String(bytes), 'content-disposition': `inline; filename="${name}"`, 'cache-control': 'private, max-age=86400' });
    await pipeline(stream, response);
  });
  return router;
}
