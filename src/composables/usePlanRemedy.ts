import { shallowRef, watch, type Ref, type ShallowRef } from 'vue';
import type { RouteLocationRaw } from 'vue-router';
import type { HttpProblem } from '../lib/httpProblem.ts';
import { useZoningsStore } from '../stores/zonings.ts';

/** Where that can be mended which keeps a zoning from being planned on, or from being planned on like an earlier plan. */
export interface PlanRemedy {
  readonly what: 'noZones' | 'zoningOutOfDate' | 'noRows' | 'noVines' | 'otherBlock';
  readonly to: RouteLocationRaw;
}

const places = { noZones: 'zoning', zoningOutOfDate: 'zoningBench', noRows: 'blockEdit', noVines: 'block' } as const satisfies Record<Exclude<PlanRemedy['what'], 'otherBlock'>, string>;

/** The place that goes with a refusal of a plan's ground; null where there is none, or the zoning cannot be looked up. */
export function usePlanRemedy({ problem, estateId, zoningId }: { problem: Ref<HttpProblem | null>; estateId: () => string; zoningId: () => string | undefined }): ShallowRef<PlanRemedy | null> {
  const zonings = useZoningsStore();
  const remedy = shallowRef<PlanRemedy | null>(null);
  watch(problem, async (refused) => {
    remedy.value = null;
    const [what, zoning] = [refused?.code as PlanRemedy['what'], zoningId()];
    if (!refused || !zoning) return;
    if (what === 'otherBlock') remedy.value = { what, to: { name: 'planNew', params: { estateId: estateId(), zoningId: zoning } } };
    if (what === 'otherBlock' || !(what in places)) return;
    const found = await zonings.view(estateId(), zoning).catch(() => null);
    if (found && problem.value === refused) remedy.value = { what, to: { name: places[what], params: { estateId: estateId(), blockId: found.blockId, ...(what === 'noZones' ? { zoningId: zoning } : {}) } } };
  }, { immediate: true });
  return remedy;
}
