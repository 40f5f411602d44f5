import { gridOfOutline, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { fromUtm, toUtm } from '../../shared/geo/utm.ts';
import type { PlacedRelief } from './placed.ts';

/** Land shown round the blocks, and how many cells a side are enough for hillshade and contours on a screen. */
const marginM = 600;
const mostCellsASide = 240;
const leastCellM = 2;

/** A coarse grid round all blocks. */
export function reliefGrid(grids: readonly Grid[]): Grid {
  const { epsg } = grids[0]!;
  const corners = grids.flatMap((grid) => cornersIn(grid, epsg));
  const span = (axis: 0 | 1) => [Math.min(...corners.map((corner) => corner[axis])) - marginM, Math.max(...corners.map((corner) => corner[axis])) + marginM] as const;
  const [[west, east], [south, north]] = [span(0), span(1)];
  const cellSizeM = Math.max(leastCellM, Math.ceil(Math.max(east - west, north - south) / mostCellsASide));
  const rectangle: MultiPolygonXY = [[[[west, south], [east, south], [east, north], [west, north], [west, south]]]];
  return gridOfOutline(rectangle, epsg, cellSizeM);
}

/** The part of the grid that has heights: its edge is where the picture of the land fades out. */
export function reliefOf({ epsg, x0, y0, cellSizeM, cols, rows }: Grid, cells: Cells): PlacedRelief {
  let [west, east, north, south] = [cols, -1, rows, -1];
  for (let cell = 0; cell < cells.length; cell++) {
    if (Number.isNaN(cells[cell]!)) continue;
    const row = Math.floor(cell / cols);
    west = Math.min(west, cell - row * cols);
    east = Math.max(east, cell - row * cols);
    north = Math.min(north, row);
    south = Math.max(south, row);
  }
  const width = Math.max(0, east - west + 1);
  const height = Math.max(0, south - north + 1);
  const part = new Float32Array(width * height);
  for (let row = 0; row < height; row++) part.set(cells.subarray((north + row) * cols + west, (north + row) * cols + west + width), row * width);
  return { epsg, x0: x0 + west * cellSizeM, y0: y0 - north * cellSizeM, cellSizeM, cols: width, rows: height, cells: part };
}

function cornersIn({ x0, y0, cellSizeM, cols, rows, epsg: own }: Grid, epsg: number): XY[] {
  const corners: XY[] = [[x0, y0], [x0 + cols * cellSizeM, y0], [x0, y0 - rows * cellSizeM], [x0 + cols * cellSizeM, y0 - rows * cellSizeM]];
  return own === epsg ? corners : corners.map((corner) => toUtm(fromUtm(corner, own), epsg));
}
