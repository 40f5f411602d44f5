import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { BlockLine } from '../../shared/contracts/blocks.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { http } from '../lib/http.ts';

/** How the blocks of an estate ripen, one block at a time. */
export const useRipenessStore = defineStore('ripeness', () => {
  const blocks = shallowRef<readonly BlockLine[]>([]);
  const view = shallowRef<RipeningView | null>(null);

  /** Blocks with zones in force: only those can be followed by zone. */
  async function loadBlocks(estateId: string): Promise<void> {
    const { items } = await http.get<{ items: BlockLine[] }>(`/api/estates/${estateId}/blocks`);
    blocks.value = items.filter((block) => block.zoning !== null);
  }

  /** `knownOn`: as it stood on that day; empty for now. */
  async function load(estateId: string, blockId: string, knownOn = ''): Promise<void> {
    view.value = null;
    view.value = await http.get<RipeningView>(`/api/estates/${estateId}/blocks/${blockId}/ripening`, { query: { known: knownOn === '' ? null : knownOn } });
  }

  return { blocks, view, loadBlocks, load };
});
