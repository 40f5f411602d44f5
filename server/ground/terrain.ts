import type { Terrain } from '../../shared/sampling/terrain.ts';
import { BlockLayer } from '../models/BlockLayer.ts';
import { Layer } from '../models/Layer.ts';
import { gridOf, type BlockVines } from './blockVines.ts';
import { storedCells } from './zoneLayers.ts';

/** The newest elevation layer that lies on a block as it is now, with its name; null where there is none. */
export async function loadTerrain(estateId: string, ground: BlockVines): Promise<(Terrain & { name: string }) | null> {
  const layers = await Layer.query().where({ estateId, type: 'elevation' }).whereNull('retiredAt').orderBy('createdAt', 'desc').select('id', 'name');
  if (layers.length === 0) return null;
  const grid = gridOf(ground);
  const placed = await BlockLayer.query().where({ estateId, blockId: ground.block.id, gridKey: grid.key }).whereIn('layerId', layers.map(({ id }) => id)).select('layerId', 'cells');
  const layer = layers.find(({ id }) => placed.some(({ layerId }) => layerId === id));
  if (!layer) return null;
  const { x0, y0, cellSizeM, cols, rows } = grid;
  return { name: layer.name, grid: { x0, y0, cellSizeM, cols, rows }, cells: storedCells(layer, placed.find(({ layerId }) => layerId === layer.id)!) };
}
