import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { decodeFloatCells } from '../../shared/analysis/cellBytes.ts';
import type { ZoningLayer } from '../../shared/analysis/zoningTypes.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { Unusable } from '../errors.ts';
import { BlockLayer } from '../models/BlockLayer.ts';
import { Layer } from '../models/Layer.ts';
import { say } from '../sentences/say.ts';

/** A layer of the estate as it lies on one block. */
export interface PlacedOnBlock {
  layer: Layer;
  placed: BlockLayer;
}

/** The chosen layers on a block, in the order asked for; those that do not lie on it are left out. */
export async function loadBlockLayers(estateId: string, blockId: string, layerIds: readonly string[]): Promise<PlacedOnBlock[]> {
  const layers = await Layer.query().where({ estateId }).whereNull('retiredAt').findByIds([...layerIds]);
  const placed = await BlockLayer.query().where({ estateId, blockId }).whereIn('layerId', [...layerIds]);
  return layerIds.flatMap((layerId) => {
    const layer = layers.find((candidate) => candidate.id === layerId);
    const on = placed.find((candidate) => candidate.layerId === layerId);
    return layer && on ? [{ layer, placed: on }] : [];
  });
}

/** As the zoning takes it; a null weight lets the advice decide. */
export function zoningLayer({ layer, placed }: PlacedOnBlock, weight: number | null): ZoningLayer {
  const type = layerType(layer.type);
  return { id: layer.id, name: layer.name, type: layer.type, role: type.role, kind: type.resampling === 'class' ? 'class' : 'number', cells: storedCells(layer, placed), weight };
}

/** Values of a layer on a block. Of several layers one may be damaged: the refusal says which. */
export function storedCells({ name }: Pick<Layer, 'name'>, { cells }: Pick<BlockLayer, 'cells'>): Float32Array {
  try {
    return decodeFloatCells(cells);
  } catch (error) {
    if (error instanceof AnalysisError) throw new Unusable('layerCells', say('layerCells', { layer: name }));
    throw error;
  }
}
