import { computed, shallowRef, type ComputedRef, type ShallowRef } from 'vue';
import type { BlockLine, BlockView } from '../../shared/contracts/blocks.ts';
import type { BlockLayerView } from '../../shared/contracts/layers.ts';
import type { BlockRowsView } from '../../shared/contracts/rows.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { layerPicture, type LayerPicture } from '../lib/layerPicture.ts';
import { countedRows, type CountedRow } from '../lib/stripRows.ts';
import { useAsk, type Ask } from './useAsk.ts';

interface Door {
  block: () => Promise<BlockView>;
  rows: () => Promise<BlockRowsView>;
  layers: () => Promise<BlockLayerView[]>;
  cells: (layer: BlockLayerView) => Promise<Float32Array>;
  line: () => BlockLine | undefined;
}

export interface BlockBook {
  loading: Ask<void, []>;
  block: ShallowRef<BlockView | null>;
  rows: ShallowRef<BlockRowsView | null>;
  layers: ShallowRef<readonly BlockLayerView[]>;
  strip: ComputedRef<CountedRow[]>;
  zones: ComputedRef<NonNullable<BlockLine['zoning']>['zones']>;
  /** The layer that lies on the map, and its cells once they are here. */
  shownLayer: ShallowRef<BlockLayerView | null>;
  picture: ShallowRef<LayerPicture | null>;
  load: () => Promise<void>;
  loadRows: () => Promise<void>;
  show: (layerId: string | null) => Promise<void>;
}

/** Everything the book of a block shows, with the layer that lies on the map. */
export function useBlockBook(door: Door): BlockBook {
  const block = shallowRef<BlockView | null>(null);
  const rows = shallowRef<BlockRowsView | null>(null);
  const layers = shallowRef<readonly BlockLayerView[]>([]);
  const shownLayer = shallowRef<BlockLayerView | null>(null);
  const picture = shallowRef<LayerPicture | null>(null);
  const loading = useAsk(async () => {
    [block.value, rows.value, layers.value] = await Promise.all([door.block(), door.rows(), door.layers()]);
  });
  const zones = computed(() => door.line()?.zoning?.zones ?? []);

  async function show(layerId: string | null): Promise<void> {
    const layer = layers.value.find((each) => each.id === layerId) ?? null;
    shownLayer.value = layer;
    picture.value = null;
    if (layer === null || block.value === null || layer.readiness === 'stale') return;
    try {
      const cells = await door.cells(layer);
      if (shownLayer.value === layer) picture.value = layerPicture(layer, block.value, cells);
    } catch (error) {
      // Cells that cannot be fetched leave the map without them; the ledger still tells of the layer.
      if (!(error instanceof HttpProblem)) throw error;
    }
  }

  return {
    loading,
    block,
    rows,
    layers,
    zones,
    strip: computed(() => (block.value && rows.value ? countedRows(block.value, rows.value, zones.value) : [])),
    shownLayer,
    picture,
    load: async () => void (await loading.run()),
    loadRows: async () => {
      [block.value, rows.value] = await Promise.all([door.block(), door.rows()]);
    },
    show,
  };
}
