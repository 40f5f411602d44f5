import { decodeFloatCells } from '../../shared/analysis/cellBytes.ts';
import { defineGrid } from '../../shared/analysis/grid.ts';
import { layerLikeness, type LayerLikeness } from '../../shared/analysis/layerShift.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

export interface LayersToCompare {
  boundary: MultiPolygonLonLat;
  cellSizeM: number;
  own: Uint8Array;
  others: Uint8Array[];
}

/** One layer of a block beside several others; null where two cannot be compared. */
export function compareLayers({ boundary, cellSizeM, own, others }: LayersToCompare): (LayerLikeness | null)[] {
  const grid = defineGrid(boundary, cellSizeM);
  const cells = decodeFloatCells(own);
  return others.map((other) => layerLikeness(grid, cells, decodeFloatCells(other)));
}
