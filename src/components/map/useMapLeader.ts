import type { GeoJSONSource, Map as MlMap } from 'maplibre-gl';
import { inject, onBeforeUnmount, watch, type ShallowRef } from 'vue';
import { twinLinkKey } from '../base/twinLink.ts';
import type { AreaGeometry } from './mapTypes.ts';
import { extentOf, ringsOf, visualCentre } from '../../lib/mapPlaces.ts';

const edgePx = 10;

/** The map's end of the leader: from its left edge, under the blocks, to the chosen shape. It rests while the map moves. */
export function useMapLeader(map: ShallowRef<MlMap | null>, shape: () => AreaGeometry | null): void {
  const link = inject(twinLinkKey, null);
  if (!link) return;
  let watched: MlMap | null = null;

  const clear = () => {
    link.mapY.value = null;
    void map.value?.getSource<GeoJSONSource>('leader')?.setData({ type: 'FeatureCollection', features: [] });
  };
  const draw = () => {
    const [ready, area] = [map.value, shape()];
    if (!ready || !area || !link.isBeside.value) return clear();
    const end = leaderEnd(ready, area);
    if (end === null) return clear();
    const [from, to] = [ready.unproject([-40, end.y]), ready.unproject([end.x, end.y])];
    void ready.getSource<GeoJSONSource>('leader')?.setData({ type: 'Feature', properties: {}, geometry: { type: 'LineString', coordinates: [from.toArray(), to.toArray()] } });
    link.mapY.value = end.y;
    link.moved.value++;
  };

  watch([map, shape, link.isBeside], ([ready]) => {
    if (ready && watched !== ready) {
      ready.on('movestart', clear);
      ready.on('moveend', draw);
      ready.on('resize', draw);
      watched = ready;
    }
    draw();
  }, { immediate: true });
  onBeforeUnmount(() => (link.mapY.value = null));
}

/** Where a level line from the left first meets the shape, on the height of its visual centre; null when out of view. */
function leaderEnd(map: MlMap, area: AreaGeometry): { x: number; y: number } | null {
  const box = extentOf([area]);
  if (box === null) return null;
  const height = map.getContainer().clientHeight;
  const y = Math.round(map.project(visualCentre(area)).y);
  if (y < edgePx || y > height - edgePx) return null;
  const crossings = ringsOf(area).flatMap((ring) => {
    const points = ring.map(([lon, lat]) => map.project([lon!, lat!]));
    return points.slice(1).flatMap((point, index) => {
      const before = points[index]!;
      if (point.y > y === before.y > y) return [];
      return [before.x + ((y - before.y) / (point.y - before.y)) * (point.x - before.x)];
    });
  });
  const x = Math.min(...crossings);
  return Number.isFinite(x) && x > 0 && x < map.getContainer().clientWidth ? { x, y } : null;
}
