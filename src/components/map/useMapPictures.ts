import type { FeatureCollection } from 'geojson';
import type { Map as MlMap } from 'maplibre-gl';
import { computed, watch, type ShallowRef } from 'vue';
import { aboveCells, aboveRelief } from './mapStyle.ts';
import { contourFeatures } from './mapFeatures.ts';
import type { MapCorners, MapRaster, MapRelief } from './mapTypes.ts';
import { cellPixels, pixelsToUrl } from '../../lib/cellPicture.ts';
import { contourLines } from '../../lib/contourLines.ts';
import { reliefPixels } from '../../lib/reliefPicture.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { useMapData } from './useMap.ts';
import { useTheme, useTokens } from '../../composables/useTheme.ts';

interface Picture {
  readonly id: string;
  readonly url: string;
  readonly corners: MapCorners;
  readonly opacity: number;
  readonly smooth: boolean;
  readonly below: string;
}

/** Hillshade and contours of the land. The picture is drawn from the heights here, so no tile server is needed. */
export function useMapRelief(map: ShallowRef<MlMap | null>, relief: () => MapRelief | null): void {
  const token = useTokens();
  const format = useFormat();
  const { theme } = useTheme();

  const contours = computed<FeatureCollection>(() => {
    const grid = relief();
    const stepM = grid?.contourStepM ?? 0;
    if (!grid || stepM <= 0) return { type: 'FeatureCollection', features: [] };
    return contourFeatures(contourLines(grid, stepM), { corners: grid.cornersLonLat, columns: grid.columns, rows: grid.rows, stepM, text: (heightM) => format.withUnit('length', heightM, 0) });
  });
  useMapData(map, 'contours', () => contours.value);

  watch([map, relief, theme], ([ready, grid]) => {
    if (!ready) return;
    const url = grid ? pixelsToUrl(reliefPixels(grid, { shade: token('shade'), light: token('light') }), grid.columns, grid.rows) : null;
    showPictures(ready, 'relief', grid && url ? [{ id: 'relief', url, corners: grid.cornersLonLat, opacity: 1, smooth: true, below: aboveRelief }] : []);
  }, { immediate: true });
}

/** Cells of layers as pictures on the blocks: true pixels, no smoothing. */
export function useMapRasters(map: ShallowRef<MlMap | null>, rasters: () => readonly MapRaster[]): void {
  watch([map, rasters], ([ready, now]) => {
    if (!ready) return;
    const pictures = now.flatMap((raster) => {
      const url = pixelsToUrl(cellPixels(raster), raster.columns, raster.rows);
      return url === null ? [] : [{ id: `cells-${raster.id}`, url, corners: raster.cornersLonLat, opacity: raster.opacity ?? 1, smooth: false, below: aboveCells }];
    });
    showPictures(ready, 'cells-', pictures);
  }, { immediate: true });
}

/** Replaces all pictures whose ids begin alike. */
function showPictures(map: MlMap, prefix: string, pictures: readonly Picture[]): void {
  for (const { id } of map.getStyle().layers.filter((layer) => layer.id.startsWith(prefix))) {
    map.removeLayer(id);
    map.removeSource(id);
  }
  for (const { id, url, corners, opacity, smooth, below } of pictures) {
    map.addSource(id, { type: 'image', url, coordinates: corners.map(([lon, lat]) => [lon, lat]) as [[number, number], [number, number], [number, number], [number, number]] });
    map.addLayer({ id, type: 'raster', source: id, paint: { 'raster-opacity': opacity, 'raster-fade-duration': 0, 'raster-resampling': smooth ? 'linear' : 'nearest' } }, below);
  }
}
