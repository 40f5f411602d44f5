import { Router } from 'express';
import { searchQuery } from '../../shared/contracts/search.ts';
import { accessOf, allow } from '../access/guard.ts';
import { search } from '../services/search.ts';

/** Finding a thing of the estate by its name. */
export function searchRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/search', allow('estate.see', 'read'), async (request, response) => {
    const items = await search(accessOf(request), searchQuery.parse(request.query).q);
    response.json({ items, total: items.length });
  });
  return router;
}
