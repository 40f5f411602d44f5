import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { BlockLine } from '../../shared/contracts/blocks.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { http } from '../lib/http.ts';
import { inOrder } from '../lib/inOrder.ts';

/** How the blocks of an estate ripen, one block at a time. */
export const useRipenessStore = defineStore('ripeness', () => {
  const blocks = shallowRef<readonly BlockLine[]>([]);
  const view = shallowRef<RipeningView | null>(null);

  /** Blocks with zones in force: only those can be followed by zone. */
  async function loadBlocks(estateId: string): Promise<void> {
    const { items } = await http.get<{ items: BlockLine[] }>(`/api/estates/${estateId}/blocks`);
    blocks.value = items.filter((block) => block.zoning !== null);
  }

  const newest = inOrder();

  /**
   * `season`: null for that of the zones in force. `knownOn`: as it stood on that day; empty for now. `unchecked`: whether figures of the lab that nobody has checked
   * count. The block asked for last is the one that is shown, whichever answer comes last.
   */
  async function load(estateId: string, blockId: string, { season = null, knownOn = '', unchecked = 'out' }: { season?: string | null; knownOn?: string; unchecked?: 'in' | 'out' } = {}): Promise<void> {
    view.value = null;
    const query = { season, known: knownOn === '' ? null : knownOn, unchecked: unchecked === 'in' ? 'in' : null };
    await newest(() => http.get<RipeningView>(`/api/estates/${estateId}/blocks/${blockId}/ripening`, { query }), (answer) => (view.value = answer));
  }

  return { blocks, view, loadBlocks, load };
});
