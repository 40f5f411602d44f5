import { ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import type { BlockWarning, OutlineCheck } from '../../shared/contracts/blocks.ts';
import { HttpProblem } from '../lib/httpProblem.ts';

const restMs = 600;

/** Asks the server about an outline when the drawing rests. A refusal is told by the drawing itself, so it stays quiet here. */
export function useOutlineCheck(request: () => Promise<OutlineCheck> | null): { warnings: ShallowRef<readonly BlockWarning[]>; isAsking: Ref<boolean>; soon: () => void } {
  const warnings = shallowRef<readonly BlockWarning[]>([]);
  const isAsking = ref(false);
  let timer: ReturnType<typeof setTimeout> | undefined;
  let newest = 0;

  async function ask(): Promise<void> {
    const mine = ++newest;
    isAsking.value = true;
    try {
      const checked = await request();
      if (mine === newest) warnings.value = checked?.warnings ?? [];
    } catch (error) {
      if (!(error instanceof HttpProblem)) throw error;
      if (mine === newest) warnings.value = [];
    } finally {
      if (mine === newest) isAsking.value = false;
    }
  }

  return {
    warnings,
    isAsking,
    soon: () => {
      clearTimeout(timer);
      timer = setTimeout(() => void ask(), restMs);
    },
  };
}
