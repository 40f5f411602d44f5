import type { Map as MlMap } from 'maplibre-gl';
import { TerraDraw, TerraDrawLineStringMode, TerraDrawPolygonMode, TerraDrawSelectMode, type GeoJSONStoreFeatures } from 'terra-draw';
import { TerraDrawMapLibreGLAdapter } from 'terra-draw-maplibre-gl-adapter';
import { onBeforeUnmount, watch, type Ref, type ShallowRef } from 'vue';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { useTokens } from '../../composables/useTheme.ts';
import { cornersFrom, ringFrom, type Corners } from './outline.ts';

export type DrawShape = 'polygon' | 'line';

interface MapDrawOptions {
  readonly shape: () => DrawShape;
  readonly corners: Ref<Corners>;
  /** True while new corners are set (`SetCorners`), false while those there are can be moved. */
  readonly isAdding: Ref<boolean>;
}

/** About 1 cm: as fine as an outline is kept. */
const decimals = 7;

/** Corners moved by pointer on the map, kept in step with the list that edits them. */
export function useMapDraw(map: ShallowRef<MlMap | null>, { shape, corners, isAdding }: MapDrawOptions): void {
  const token = useTokens();
  let draw: TerraDraw | null = null;
  let shown = '';

  const mode = () => (shape() === 'polygon' ? 'polygon' : 'linestring');
  const rounded = ([lon, lat]: LonLat): LonLat => [Number(lon.toFixed(decimals)), Number(lat.toFixed(decimals))];

  function read(): void {
    const found = draw?.getSnapshot().find((feature) => feature.properties.mode === mode());
    if (!found || found.geometry.type === 'Point') return;
    const ring = found.geometry.type === 'Polygon' ? found.geometry.coordinates[0]! : (found.geometry.coordinates as number[][]);
    const read = cornersFrom(ring).map(rounded);
    shown = JSON.stringify(read);
    corners.value = read;
  }

  function show(): void {
    const wanted = isAdding.value ? '' : JSON.stringify(corners.value);
    if (!draw || wanted === shown) return;
    shown = wanted;
    draw.clear();
    const enough = corners.value.length >= (shape() === 'polygon' ? 3 : 2);
    if (isAdding.value || !enough) return;
    const geometry = shape() === 'polygon' ? { type: 'Polygon' as const, coordinates: [ringFrom(corners.value.map(rounded))] } : { type: 'LineString' as const, coordinates: corners.value.map(rounded).map(([lon, lat]) => [lon, lat]) };
    draw.addFeatures([{ type: 'Feature', geometry, properties: { mode: mode() } } as GeoJSONStoreFeatures]);
    const id = draw.getSnapshot()[0]?.id;
    if (id !== undefined) draw.selectFeature(id);
  }

  watch(map, (ready) => {
    if (!ready || draw) return;
    const sky = token('sky') as `#${string}`;
    const sheet = token('sheet') as `#${string}`;
    const edit = { feature: { draggable: false, coordinates: { midpoints: true, draggable: true, deletable: true } } };
    draw = new TerraDraw({
      adapter: new TerraDrawMapLibreGLAdapter({ map: ready, coordinatePrecision: decimals }),
      // What is selected is of one of the first two, which are not drawn with.
      modes: [
        new TerraDrawPolygonMode(),
        new TerraDrawLineStringMode(),
        new TerraDrawSelectMode({ flags: { polygon: edit, linestring: edit }, styles: { selectedPolygonColor: sky, selectedPolygonFillOpacity: 0.12, selectedPolygonOutlineColor: sky, selectedPolygonOutlineWidth: 3, selectedLineStringColor: sky, selectedLineStringWidth: 3, selectionPointColor: sheet, selectionPointWidth: 6, selectionPointOutlineColor: sky, selectionPointOutlineWidth: 3, midPointColor: sky, midPointWidth: 4, midPointOutlineColor: sheet, midPointOutlineWidth: 1 } }),
      ],
    });
    draw.start();
    draw.setMode('select');
    draw.on('change', (_ids, type) => type === 'update' && !isAdding.value && read());
    show();
  }, { immediate: true });

  watch([corners, isAdding], show);
  onBeforeUnmount(() => draw?.stop());
}
