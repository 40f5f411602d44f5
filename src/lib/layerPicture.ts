import { defineGrid, type Grid } from '../../shared/analysis/grid.ts';
import { layerType, type RampName } from '../../shared/catalog/layerTypes.ts';
import type { BlockLayerView } from '../../shared/contracts/layers.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { ownClassColours } from './colours.ts';

type Corner = readonly [number, number];

/** Cells of a layer as the map draws them. */
export interface LayerPicture {
  readonly id: string;
  readonly cells: ArrayLike<number>;
  readonly columns: number;
  readonly rows: number;
  readonly cornersLonLat: readonly [Corner, Corner, Corner, Corner];
  readonly ramp: RampName;
  readonly range: readonly [number, number];
  readonly own: Readonly<Record<number, string>>;
}

/**
 * Places cells on the map: the grid follows from the block's outline and cell size, so nothing but the cells is fetched.
 * Null when the cells belong to an older outline.
 */
export function layerPicture(layer: BlockLayerView, block: { boundary: { coordinates: unknown }; cellSizeM: number }, cells: ArrayLike<number>): LayerPicture | null {
  const grid = defineGrid(block.boundary.coordinates as MultiPolygonLonLat, block.cellSizeM);
  if (grid.key !== layer.gridKey || cells.length !== grid.cols * grid.rows) return null;
  return {
    id: layer.id,
    cells,
    columns: grid.cols,
    rows: grid.rows,
    cornersLonLat: cornersOfGrid(grid),
    ramp: layerType(layer.type).ramp,
    range: shownRange(layer),
    own: ownClassColours(layer.classes),
  };
}

/** Corners of the outer cell edges, as a picture on the map wants them. */
export function cornersOfGrid({ x0, y0, cols, rows, cellSizeM, epsg }: Grid): LayerPicture['cornersLonLat'] {
  const corner = (col: number, row: number): Corner => {
    const [lon, lat] = fromUtm([x0 + col * cellSizeM, y0 - row * cellSizeM], epsg);
    return [lon, lat];
  };
  return [corner(0, 0), corner(cols, 0), corner(cols, rows), corner(0, rows)];
}

/** Ends of the colour ramp: all but the outermost 2 % of the cells, so that a few odd ones do not flatten the picture. */
export function shownRange(layer: Pick<BlockLayerView, 'statistics'>): readonly [number, number] {
  const { quantiles, min, max } = layer.statistics;
  const at = (share: number) => quantiles.find((each) => each.share === share)?.value;
  const [low, high] = [at(0.02) ?? min ?? 0, at(0.98) ?? max ?? 1];
  return high > low ? [low, high] : [min ?? 0, max ?? 1];
}

/** Figures worth writing of a layer's values: the catalogue's, or enough to tell small numbers apart. */
export function layerDecimals(layer: Pick<BlockLayerView, 'type' | 'statistics'>): number {
  const { min, max } = layer.statistics;
  const span = min === null || max === null ? 0 : max - min;
  const usual = layerType(layer.type).decimals;
  return span > 0 && span < 10 ** -usual * 5 ? usual + 2 : usual;
}
