import { computed, ref, shallowRef, watch, type Ref } from 'vue';
import type { BlockView } from '../../../shared/contracts/blocks.ts';
import type { ZoneView, ZoningMemberships } from '../../../shared/contracts/zonings.ts';
import { useAsk } from '../../composables/useAsk.ts';
import { certaintyPicture, type Reading } from './certaintyPicture.ts';
import { ownColoursOf } from './zoneStrip.ts';

/** What the picture is of: a zoning, the number of its zones, and whatever changes when a hand changes them. */
export interface CertaintySubject {
  readonly id: string;
  readonly zones: number;
  readonly revision: number;
}

/** The zones of a run the greyer the less certain, off until it is asked for; and the place that was read off it. */
export function useCertainty(load: (subject: CertaintySubject) => Promise<ZoningMemberships>, { subject, block, zones }: { subject: () => CertaintySubject | null; block: Ref<BlockView | null>; zones: Ref<readonly ZoneView[]> }) {
  const isOn = ref(false);
  const reading = shallowRef<Reading | null>(null);
  const asking = useAsk(async (of: CertaintySubject) => ({ of, key: JSON.stringify(of), found: await load(of) }));
  const key = computed(() => JSON.stringify(subject()));
  const picture = computed(() => {
    const asked = asking.data.value;
    const of = subject();
    // After a change by hand the picture stays until the new one has come: what the run found has not changed.
    if (!isOn.value || !block.value || !asked || asked.of.id !== of?.id || asked.of.zones !== of.zones) return null;
    return certaintyPicture(block.value, asked.found, ownColoursOf(zones.value));
  });

  watch([isOn, key], async ([on]) => {
    reading.value = null;
    const of = subject();
    if (on && of !== null && asking.data.value?.key !== key.value && !(await asking.run(of))) isOn.value = false;
  });
  return { isOn, picture, reading, isBusy: asking.isBusy, problem: asking.problem, read: (place: readonly [lon: number, lat: number]) => (reading.value = picture.value?.read(place) ?? null) };
}
