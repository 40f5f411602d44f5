import type { Page } from 'playwright-core';

interface Source {
  readonly features: readonly { readonly geometry: { readonly type: string; readonly coordinates: unknown }; readonly properties: Readonly<Record<string, unknown>> }[];
}
interface MapOnPage {
  getSource: (id: string) => { serialize: () => { data: Source } } | undefined;
  queryRenderedFeatures: (options: { layers: readonly string[] }) => { readonly properties: Readonly<Record<string, unknown>> }[];
  getStyle: () => { readonly layers: readonly { readonly id: string; readonly type: string }[] };
  loaded: () => boolean;
}
interface Node {
  readonly component?: { readonly provides: Record<symbol, unknown>; readonly subTree: Node } | null;
  readonly suspense?: { readonly activeBranch: Node | null } | null;
  readonly children?: unknown;
}

/** What a source of the page's map was given and which of it the map has drawn in a layer, by id; null while there is no map or it still draws. */
export interface MapContents {
  readonly held: Source['features'];
  readonly drawnIds: readonly string[];
  /** Pictures on the map, such as the relief and cells, from below. */
  readonly pictures: readonly string[];
}

/** Reads the map itself through the components that share it: what a layer holds is not written anywhere on the page. */
export function readMap(page: Page, source: string, layer: string): Promise<MapContents | null> {
  return page.evaluate(({ source, layer }) => {
    const find = (node: Node | null | undefined): MapOnPage | null => {
      if (!node) return null;
      const provides = node.component?.provides ?? {};
      const key = Object.getOwnPropertySymbols(provides).find(({ description }) => description === 'map');
      const map = key && (provides[key] as { value: MapOnPage | null }).value;
      if (map) return map;
      const inside = [node.component?.subTree, node.suspense?.activeBranch, ...(Array.isArray(node.children) ? (node.children as Node[]) : [])];
      for (const one of inside) {
        const found = typeof one === 'object' ? find(one) : null;
        if (found) return found;
      }
      return null;
    };
    const map = find((document.querySelector('#app') as unknown as { _vnode: Node })._vnode);
    if (!map?.loaded()) return null;
    const drawn = map.queryRenderedFeatures({ layers: [layer] });
    return { held: map.getSource(source)?.serialize().data.features ?? [], drawnIds: [...new Set(drawn.map(({ properties }) => String(properties.id)))], pictures: map.getStyle().layers.filter(({ type }) => type === 'raster').map(({ id }) => id) };
  }, { source, layer });
}
