import type { Express } from 'express';

export interface ServedRoute {
  method: string;
  /** As written at the route, below `/api` or below the estate. */
  path: string;
  belowEstate: boolean;
}

interface Layer {
  name: string;
  rawPath?: string;
  route?: { path: string; methods: Record<string, boolean> };
  handle: { stack?: Layer[] };
}

/** Every route that the application really serves below /api, read from its routers: nothing can be forgotten in a list. */
export function routesOf(app: Express): ServedRoute[] {
  const { stack } = (app as unknown as { router: { stack: Layer[] } }).router;
  return stack.flatMap((layer) => (layer.handle.stack ? routesIn(layer.handle.stack, false) : []));
}

function routesIn(stack: Layer[], belowEstate: boolean): ServedRoute[] {
  let guarded = belowEstate;
  return stack.flatMap((layer) => {
    if (layer.name === 'estateGuard') guarded = true;
    if (layer.route) return Object.keys(layer.route.methods).map((method) => ({ method, path: layer.route!.path, belowEstate: guarded }));
    if (layer.handle.stack) return routesIn(layer.handle.stack, guarded);
    // A handler that takes a whole address, whatever the method, such as the one for uploads in pieces.
    return belowEstate && layer.rawPath !== undefined && layer.rawPath !== '/' ? [{ method: 'all', path: layer.rawPath, belowEstate }] : [];
  });
}
