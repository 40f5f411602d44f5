import { computed, ref, shallowRef, watch, type ComputedRef, type Ref } from 'vue';
import type { BlockView } from '../../shared/contracts/blocks.ts';
import type { BlockLayerView, LayerFinding } from '../../shared/contracts/layers.ts';
import { markedGround, type MarkedGround } from '../lib/markedGround.ts';

interface Door {
  block: () => BlockView | null;
  layer: () => BlockLayerView | null;
  marks: (layer: BlockLayerView) => Promise<Uint8Array | null>;
}

export interface FindingPlace {
  /** Code of the finding whose place the map shows. */
  chosen: Ref<string | null>;
  finding: ComputedRef<LayerFinding | null>;
  /** Ground it is about; null while it is fetched, and for findings about the whole block. */
  ground: ComputedRef<MarkedGround | null>;
}

/** Where the chosen finding about a layer holds. Marks are fetched when the first finding is chosen. */
export function useFindingPlace(door: Door): FindingPlace {
  const chosen = ref<string | null>(null);
  const marks = shallowRef<{ layer: BlockLayerView; bytes: Uint8Array | null } | null>(null);
  const finding = computed(() => door.layer()?.findings.find(({ code }) => code === chosen.value) ?? null);

  watch(finding, async (now) => {
    const layer = door.layer();
    if (now?.mark === undefined || layer === null || marks.value?.layer === layer) return;
    const bytes = await door.marks(layer).catch(() => null);
    if (door.layer() === layer) marks.value = { layer, bytes };
  });

  const ground = computed(() => {
    const block = door.block();
    const bytes = marks.value?.layer === door.layer() ? marks.value?.bytes : null;
    return finding.value?.mark === undefined || block === null || !bytes ? null : markedGround(block, bytes, finding.value.mark);
  });
  return { chosen, finding, ground };
}
