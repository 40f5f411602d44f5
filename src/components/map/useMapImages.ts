import type { Map as MlMap } from 'maplibre-gl';
import { computed, watch, type ShallowRef } from 'vue';
import { addDoubt, addFlag, addPill, addPointMarks, addRestriction, addZonePattern, type ImageInk } from './mapImages.ts';
import type { MapGhost, MapZone } from './mapTypes.ts';
import { useTheme, useTokens } from '../../composables/useTheme.ts';

interface MapImagesOptions {
  readonly zones: () => readonly MapZone[];
  readonly ghosts: () => readonly MapGhost[];
  readonly ghostColours: () => { chosen: string; other: string };
}

/** Draws the images that the map's features name, before the features ask for them, and again when the theme changes. */
export function useMapImages(map: ShallowRef<MlMap | null>, { zones, ghosts, ghostColours }: MapImagesOptions): void {
  const { theme } = useTheme();
  const token = useTokens();
  const ink = computed<ImageInk>(() => ({ pill: token('pill'), pillInk: token('pill-ink'), pillLine: token('pill-line'), brick: token('brick'), brickSoft: token('brick-soft'), mark: token('mark'), ink: token('ink'), sheet: token('sheet'), moss: token('moss') }));

  watch([map, theme], ([ready]) => {
    if (!ready) return;
    addRestriction(ready, ink.value);
    addDoubt(ready, ink.value);
    addPointMarks(ready, ink.value);
    for (const number of new Set(zones().map(({ zone }) => zone))) addPill(ready, String(number), ink.value);
  }, { immediate: true });

  watch([map, zones], ([ready, now]) => {
    if (!ready) return;
    for (const look of now) {
      addZonePattern(ready, look);
      if (!ready.hasImage(`pill-${look.zone}`)) addPill(ready, String(look.zone), ink.value);
    }
  }, { immediate: true });

  watch([map, ghosts, theme], ([ready, now]) => {
    if (!ready) return;
    const { chosen, other } = ghostColours();
    for (const ghost of now) addFlag(ready, ghost.letter, ghost.chosen ? chosen : other);
  }, { immediate: true });
}
