import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { LayerBeside } from '../../../shared/contracts/layers.ts';
import type { LayerLikeness } from '../../../shared/analysis/layerShift.ts';
import type { Access } from '../../access/access.ts';
import { storedCells } from '../../ground/zoneLayers.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Layer } from '../../models/Layer.ts';
import { runCompute } from '../../workers/computePool.ts';
import { findBlock } from '../blocks/view.ts';

/** More layers than this are not compared at once; the newest are. */
const mostOthers = 8;

/** A layer beside the other layers of numbers on a block: which tell the same story, and which of its kind lie off it. */
export async function layersBeside(access: Access, layerId: string, blockId: string): Promise<LayerBeside[]> {
  const { estateId } = access;
  const block = await findBlock(access, blockId);
  const layers = await Layer.query().where({ estateId }).whereNull('retiredAt').orderBy('createdAt', 'desc');
  const own = layers.find((layer) => layer.id === layerId);
  const here = await BlockLayer.query().findOne({ estateId, layerId, blockId, gridKey: block.gridKey });
  if (!own || !here || layerType(own.type).resampling === 'class') return [];
  // What is made from a layer tells its story by its making.
  const others = layers.filter((layer) => layer.id !== layerId && layerType(layer.type).resampling !== 'class' && layer.derivedFrom === null && own.derivedFrom !== layer.id).slice(0, mostOthers);
  const rows = await BlockLayer.query().where({ estateId, blockId, gridKey: block.gridKey }).whereIn('layerId', others.map((layer) => layer.id)).select('layerId', 'cells');
  const placed = rows.map((row) => ({ row, layer: others.find((layer) => layer.id === row.layerId)! }));
  const likenesses = await runCompute<(LayerLikeness | null)[]>(
    'compareLayers',
    {
      boundary: block.boundary.coordinates,
      cellSizeM: block.cellSizeM,
      own: storedCells(own, here),
      others: placed.map(({ layer, row }) => storedCells(layer, row)),
    },
    { lane: 'quick' },
  );
  return placed.flatMap(({ layer: other }, at) => {
    const likeness = likenesses[at];
    if (!likeness) return [];
    const shift = other.type === own.type && (likeness.shift.eastM !== 0 || likeness.shift.northM !== 0) ? likeness.shift : null;
    return { id: other.id, name: other.name, type: other.type, measuredOn: other.measuredOn, correlation: likeness.correlation, shift };
  });
}
