import { computed, onBeforeUnmount, ref, shallowRef, watch, type ComputedRef, type Ref } from 'vue';
import type { SetAsideReason } from '../../shared/analysis/cleanPoints.ts';
import type { AsideReading, BlockLayerView } from '../../shared/contracts/layers.ts';
import { followJob, isFinished } from '../lib/jobEvents.ts';
import { useAsk, type Ask } from './useAsk.ts';

interface Door {
  estateId: () => string;
  layer: () => BlockLayerView | null;
  aside: (layer: BlockLayerView) => Promise<AsideReading[]>;
  clean: (taken: SetAsideReason[]) => Promise<string>;
  /** Reads the layer anew when it has been made anew. */
  made: () => Promise<void>;
}

interface SurveyMark {
  readonly id: string;
  readonly kind: 'reading';
  readonly geometry: { type: 'Point'; coordinates: [number, number] };
}

export interface Survey {
  /** Reason whose readings the map marks. */
  shown: Ref<SetAsideReason | null>;
  marks: ComputedRef<SurveyMark[]>;
  isRemaking: Ref<boolean>;
  cleaning: Ask<string, [SetAsideReason[]]>;
  take: (taken: SetAsideReason[]) => Promise<void>;
}

/** Readings set aside from a layer of points: marked on the map by reason, and taken back, which makes the layer anew. */
export function useSurvey(door: Door): Survey {
  const shown = ref<SetAsideReason | null>(null);
  const readings = shallowRef<readonly AsideReading[]>([]);
  const isRemaking = ref(false);
  const cleaning = useAsk(door.clean);
  let stopFollowing = (): void => undefined;

  const marks = computed(() => readings.value.filter(({ reason }) => reason === shown.value).map(({ lonLat }, at): SurveyMark => ({ id: `aside-${at}`, kind: 'reading', geometry: { type: 'Point', coordinates: [...lonLat] } })));

  watch([shown, () => door.layer()], async ([reason, layer]) => {
    readings.value = reason !== null && layer !== null && layer.survey !== null ? await door.aside(layer).catch(() => []) : [];
  });

  async function take(taken: SetAsideReason[]): Promise<void> {
    if (!(await cleaning.run(taken))) return;
    isRemaking.value = true;
    shown.value = null;
    stopFollowing = followJob({ estateId: door.estateId(), jobId: cleaning.data.value! }, (job) => {
      if (!isFinished(job)) return;
      isRemaking.value = false;
      void door.made();
    });
  }

  onBeforeUnmount(() => stopFollowing());
  return { shown, marks, isRemaking, cleaning, take };
}
