import { computed, ref, watch, type Ref } from 'vue';
import type { BlockView } from '../../../shared/contracts/blocks.ts';
import type { ZoneView, ZoningDoubt, ZoningMemberships, ZoningSeasons, ZoningView } from '../../../shared/contracts/zonings.ts';
import { useCertainty, type CertaintySubject } from './useCertainty.ts';

interface Shown {
  readonly block: Ref<BlockView | null>;
  readonly zoning: Ref<ZoningView | null>;
  readonly zones: Ref<readonly ZoneView[]>;
  /** The number of zones asked for. */
  readonly shown: Ref<number>;
  readonly doubt: Ref<ZoningDoubt | null>;
  readonly seasons: Ref<ZoningSeasons | null>;
}

/**
 * What the map of a run is a picture of. It holds one at a time: the zones, or in their place the steady ground of other seasons or how certain each
 * cell is. Over the zones ground that stands out is hatched before vines in doubt, and neither over another picture.
 */
export function useMapPicture({ block, zoning, zones, shown, doubt, seasons }: Shown, memberships: (of: CertaintySubject) => Promise<ZoningMemberships>) {
  /** The layer whose steady ground stands in place of the zones. */
  const groundOf = ref<string | null>(null);
  const isApartShown = ref(true);
  const certainty = useCertainty(memberships, { block, zones, subject: () => (zoning.value && zones.value.length > 1 ? { id: zoning.value.id, zones: shown.value, revision: zoning.value.revision } : null) });

  const ground = computed(() => seasons.value?.ground.find(({ layerId }) => layerId === groundOf.value) ?? null);
  const apart = computed(() => (isApartShown.value ? (zoning.value?.standsOut ?? null) : null));
  const hatched = computed(() => (ground.value || certainty.picture.value ? null : (apart.value ?? doubt.value?.geometry ?? null)));

  watch(groundOf, (on) => on !== null && (certainty.isOn.value = false));
  watch(certainty.isOn, (on) => on && (groundOf.value = null));

  /** Another run begins with its zones. */
  function begin(): void {
    groundOf.value = null;
    certainty.isOn.value = false;
    isApartShown.value = true;
  }

  return { groundOf, isApartShown, certainty, ground, apart, hatched, begin };
}

export type MapPicture = ReturnType<typeof useMapPicture>;
