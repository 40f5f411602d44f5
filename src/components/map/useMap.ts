import { Map as MlMap, setWorkerUrl, type GeoJSONSource } from 'maplibre-gl';
import workerUrl from 'maplibre-gl/dist/maplibre-gl-worker.mjs?url';
import 'maplibre-gl/dist/maplibre-gl.css';
import type { FeatureCollection } from 'geojson';
import { computed, markRaw, onMounted, onUnmounted, shallowRef, watch, type InjectionKey, type Ref, type ShallowRef } from 'vue';
import { mapLayers, mapStyle, type MapInk, type MapSource } from './mapStyle.ts';
import { useTheme, useTokens } from '../../composables/useTheme.ts';

// The worker is a file of our own build; without its address shapes are never drawn.
setWorkerUrl(workerUrl);

/** The map once it can be drawn on, for parts that sit inside it. */
export const mapKey: InjectionKey<ShallowRef<MlMap | null>> = Symbol('map');

type Bounds = [number, number, number, number];
/** Left free around what is shown whole. */
export const mapMargin = 56;
/** At the side of the buttons, so that a block's name, which may be longer than the block, does not lie under them. */
const buttonMargin = 88;

/** Makes the map in the given element, keeps its colours in step with the theme, and takes it down again. */
export function useMap(container: Ref<HTMLElement | null>, options: { label: () => string; start: () => Bounds | null; /** Left free at the top and at the foot. */ head: () => number; foot: () => number }) {
  const map = shallowRef<MlMap | null>(null);
  const failed = shallowRef(false);
  const { theme } = useTheme();
  const token = useTokens();
  const ink = computed<MapInk>(() => ({
    land: token('land'), ground: token('ground'), ink: token('ink'), contour: token('contour'), contourIndex: token('contour-index'), water: token('water'),
    track: token('track'), trackEdge: token('track-edge'), zoneLine: token('zone-line'), brick: token('brick'), sky: token('sky'), amber: token('amber'), muted: token('muted'),
  }));
  let made: MlMap | null = null;

  onMounted(() => {
    const bounds = options.start();
    try {
      made = new MlMap({
        container: container.value!,
        style: mapStyle(ink.value),
        ...(bounds ? { bounds, fitBoundsOptions: { padding: { top: mapMargin, left: mapMargin, right: buttonMargin, bottom: mapMargin } } } : { center: [0, 30], zoom: 1 }),
        attributionControl: false, dragRotate: false, pitchWithRotate: false, touchPitch: false, maxZoom: 22, fadeDuration: 0, locale: { 'Map.Title': options.label() },
      });
    } catch {
      // No WebGL on this device: the ledger holds every fact, and the view says that the map cannot be drawn.
      failed.value = true;
      return;
    }
    made.touchZoomRotate.disableRotation();
    made.keyboard.disableRotation();
    made.once('load', () => (map.value = markRaw(made!)));
    followSize(made);
  });
  const ours = { isOurs: true };
  let shown: Bounds | null = options.start();

  /** What was last shown whole stays whole when its place changes size, until the person looks elsewhere. */
  function followSize(ready: MlMap): void {
    const letGo = (event: object) => 'isOurs' in event || (shown = null);
    // A movement by hand or by keys has the event that began it.
    ready.on('movestart', (event) => event.originalEvent && letGo(event));
    ready.on('zoomstart', letGo);
    ready.on('resize', showAgain);
  }

  function showBounds(bounds: Bounds, duration: number): void {
    shown = bounds;
    map.value?.fitBounds(bounds, { padding: { top: options.head(), left: mapMargin, right: buttonMargin, bottom: options.foot() }, duration }, ours);
  }

  /** Shows it whole again when its room has changed, unless the person looks elsewhere by now. */
  const showAgain = () => shown && showBounds(shown, 0);

  watch(theme, () => map.value && recolour(map.value, ink.value));
  // After the parts that draw on it: the pen takes its own layers off first.
  onUnmounted(() => {
    map.value = null;
    made?.remove();
  });
  return { map, ink, failed, showBounds, showAgain };
}

function recolour(map: MlMap, ink: MapInk): void {
  for (const layer of mapLayers(ink)) {
    for (const [name, value] of Object.entries(layer.paint ?? {})) map.setPaintProperty(layer.id, name as never, value as never);
  }
}

/** Puts features into one of the style's sources, now and whenever they change. */
export function useMapData(map: ShallowRef<MlMap | null>, source: MapSource, features: () => FeatureCollection): void {
  watch([map, features], ([ready, data]) => ready?.getSource<GeoJSONSource>(source)?.setData(data), { immediate: true });
}
