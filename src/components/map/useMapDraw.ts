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
  /** False while corners are only moved, true to set new ones by clicking. */
  readonly isAdding: Ref<boolean>;
}

/** Pixels round the first corner in which a click ends the shape: a fingertip, and no more, so that a small piece can be drawn. */
const pointerDistance = 22;

/** About 1 cm: as fine as an outline is kept. */
const decimals = 7;

/** Drawing by pointer on the map, kept in step with the corners that the list edits. */
export function useMapDraw(map: ShallowRef<MlMap | null>, { shape, corners, isAdding }: MapDrawOptions): void {
  const token = useTokens();
  let draw: TerraDraw | null = null;
  let shown = '';

  const modeOf = () => (isAdding.value ? (shape() === 'polygon' ? 'polygon' : 'linestring') : 'select');
  const rounded = ([lon, lat]: LonLat): LonLat => [Number(lon.toFixed(decimals)), Number(lat.toFixed(decimals))];

  function read(): void {
    const found = draw?.getSnapshot().find((feature) => feature.properties.mode === (shape() === 'polygon' ? 'polygon' : 'linestring'));
    if (!found || found.geometry.type === 'Point') return;
    const ring = found.geometry.type === 'Polygon' ? found.geometry.coordinates[0]! : (found.geometry.coordinates as number[][]);
    const read = cornersFrom(ring).map(rounded);
    shown = JSON.stringify(read);
    corners.value = read;
  }

  /** Corners set so far, without the one that follows the pointer: a shape counts as soon as it has enough, finished or not. */
  function readSoFar(): void {
    const found = draw?.getSnapshot().find(({ properties }) => properties.mode === modeOf() && properties.currentlyDrawing);
    if (!found || found.geometry.type === 'Point') return;
    const line = (found.geometry.type === 'Polygon' ? found.geometry.coordinates[0]! : found.geometry.coordinates) as number[][];
    const count = found.geometry.type === 'Polygon' ? Number(found.properties.committedCoordinateCount ?? 0) : line.length - 1;
    const soFar = line.slice(0, count).map(([lon, lat]) => rounded([lon!, lat!]));
    if (JSON.stringify(soFar) === shown) return;
    shown = JSON.stringify(soFar);
    corners.value = soFar;
  }

  function show(): void {
    if (!draw || JSON.stringify(corners.value) === shown) return;
    shown = JSON.stringify(corners.value);
    draw.clear();
    const enough = shape() === 'polygon' ? corners.value.length >= 3 : corners.value.length >= 2;
    if (!enough) return;
    const geometry = shape() === 'polygon' ? { type: 'Polygon' as const, coordinates: [ringFrom(corners.value.map(rounded))] } : { type: 'LineString' as const, coordinates: corners.value.map(rounded).map(([lon, lat]) => [lon, lat]) };
    draw.addFeatures([{ type: 'Feature', geometry, properties: { mode: shape() === 'polygon' ? 'polygon' : 'linestring' } } as GeoJSONStoreFeatures]);
    const id = draw.getSnapshot()[0]?.id;
    if (id !== undefined && !isAdding.value) draw.selectFeature(id);
  }

  watch(map, (ready) => {
    if (!ready || draw) return;
    const sky = token('sky') as `#${string}`;
    const sheet = token('sheet') as `#${string}`;
    const edit = { feature: { draggable: false, coordinates: { midpoints: true, draggable: true, deletable: true } } };
    draw = new TerraDraw({
      adapter: new TerraDrawMapLibreGLAdapter({ map: ready, coordinatePrecision: decimals }),
      modes: [
        new TerraDrawPolygonMode({ pointerDistance, styles: { fillColor: sky, fillOpacity: 0.12, outlineColor: sky, outlineWidth: 3, closingPointColor: sheet, closingPointWidth: 6, closingPointOutlineColor: sky, closingPointOutlineWidth: 3 } }),
        new TerraDrawLineStringMode({ pointerDistance, styles: { lineStringColor: sky, lineStringWidth: 3, closingPointColor: sheet, closingPointWidth: 6, closingPointOutlineColor: sky, closingPointOutlineWidth: 3 } }),
        new TerraDrawSelectMode({ flags: { polygon: edit, linestring: edit }, styles: { selectedPolygonColor: sky, selectedPolygonFillOpacity: 0.12, selectedPolygonOutlineColor: sky, selectedPolygonOutlineWidth: 3, selectedLineStringColor: sky, selectedLineStringWidth: 3, selectionPointColor: sheet, selectionPointWidth: 6, selectionPointOutlineColor: sky, selectionPointOutlineWidth: 3, midPointColor: sky, midPointWidth: 4, midPointOutlineColor: sheet, midPointOutlineWidth: 1 } }),
      ],
    });
    draw.start();
    draw.setMode(modeOf());
    draw.on('finish', () => {
      read();
      isAdding.value = false;
    });
    draw.on('change', (_ids, type) => (isAdding.value ? readSoFar() : type === 'update' && read()));
    show();
  }, { immediate: true });

  watch(isAdding, () => {
    if (!draw) return;
    if (isAdding.value) draw.clear();
    shown = isAdding.value ? '' : shown;
    draw.setMode(modeOf());
    if (!isAdding.value) {
      shown = '';
      show();
    }
  });
  watch(corners, show);
  onBeforeUnmount(() => draw?.stop());
}
