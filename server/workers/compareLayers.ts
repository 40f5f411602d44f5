import { defineGrid } from '../../shared/analysis/grid.ts';
import { layerLikeness, type LayerLikeness } from '../../shared/analysis/layerShift.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

export interface LayersToCompare {
  boundary: MultiPolygonLonLat;
  cellSizeM: number;
  own: Float32Array;
  others: Float32Array[];
}

/** One layer of a block beside several others; null where two cannot be compared. */
export function compareLayers({ boundary, cellSizeM, own, others }: LayersToCompare): (LayerLikeness | null)[] {
  const grid = defineGrid(boundary, cellSizeM);
  return others.map((other) => layerLikeness(grid, own, other));
}
