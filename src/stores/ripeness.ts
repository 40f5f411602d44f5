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

  let asked = 0;

  /**
   * `knownOn`: as it stood on that day; empty for now. `unchecked`: whether figures of the lab that nobody has checked
   * count. The block asked for last is the one that is shown, whichever answer comes last.
   */
  async function load(estateId: string, blockId: string, { knownOn = '', unchecked = 'out' }: { knownOn?: string; unchecked?: 'in' | 'out' } = {}): Promise<void> {
    const mine = ++asked;
    view.value = null;
    const answer = await http.get<RipeningView>(`/api/estates/${estateId}/blocks/${blockId}/ripening`, { query: { known: knownOn === '' ? null : knownOn, unchecked: unchecked === 'in' ? 'in' : null } });
    if (mine === asked) view.value = answer;
  }

  return { blocks, view, loadBlocks, load };
});
