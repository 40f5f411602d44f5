import type { Map as MlMap, MapLayerMouseEvent } from 'maplibre-gl';
import { watch, type Ref, type ShallowRef } from 'vue';

export type MapPick = 'block' | 'zone' | 'ghost' | 'point';
const layersOf: Record<MapPick, { source: string; layers: string[] }> = {
  block: { source: 'blocks', layers: ['block-fill'] },
  zone: { source: 'zones', layers: ['zone-fill'] },
  ghost: { source: 'ghosts', layers: ['ghost-line', 'ghost-line-other', 'ghost-flags'] },
  point: { source: 'points', layers: ['points'] },
};

/** Choosing on the map, and the bold outline of what is chosen anywhere. `isOff`: presses on the map mean something else, such as corners of a drawing. */
export function useMapPick(map: ShallowRef<MlMap | null>, { pick, isOff, chosen, open }: { pick: () => MapPick; isOff: () => boolean; chosen: Ref<string | null>; open: (id: string) => void }): void {
  const idAt = (event: MapLayerMouseEvent, ready: MlMap): string | null => {
    if (isOff()) return null;
    const found = ready.queryRenderedFeatures(event.point, { layers: layersOf[pick()].layers })[0];
    const id: unknown = found?.properties.id;
    return typeof id === 'string' ? id : null;
  };
  const mark = (ready: MlMap, id: string | null, isChosen: boolean) => {
    if (id !== null) ready.setFeatureState({ source: layersOf[pick()].source, id }, { chosen: isChosen });
  };

  watch(map, (ready) => {
    if (!ready) return;
    ready.on('click', (event) => {
      const id = idAt(event as MapLayerMouseEvent, ready);
      if (id !== null) chosen.value = id;
    });
    ready.on('dblclick', (event) => {
      const id = idAt(event as MapLayerMouseEvent, ready);
      if (id === null) return;
      event.preventDefault();
      open(id);
    });
    ready.on('mousemove', (event) => {
      if (!isOff()) ready.getCanvas().style.cursor = idAt(event as MapLayerMouseEvent, ready) === null ? '' : 'pointer';
    });
    mark(ready, chosen.value, true);
  }, { immediate: true });

  watch(chosen, (now, before) => {
    if (!map.value) return;
    mark(map.value, before, false);
    mark(map.value, now, true);
  });
}
