import { Router } from 'express';
import { signedIn } from '../access/guard.ts';
import { listFormats } from '../services/zonings/exportZones.ts';

/** Formats that zones can be exported in, for menus. */
export function formatRoutes(): Router {
  const router = Router();
  router.get('/formats', (request, response) => {
    signedIn(request);
    const items = listFormats();
    response.json({ items, total: items.length });
  });
  return router;
}
