/**
 * Where a raster lies, and how its pixels map to the cells of a grid and back.
 * Positions in a raster are in pixels from its outer corner: pixel (col, row) is [col, col+1) × [row, row+1), as in
 * GeoTIFF's PixelIsArea; a PixelIsPoint file must be shifted by half a pixel before.
 */
import type { GridFrame } from './grid.ts';
import { latticeMap, linearMap, type PlaneMap } from './resampleMap.ts';

/** Six numbers: x = t0 + col·t1 + row·t2, y = t3 + col·t4 + row·t5 for the outer corner of a pixel. */
export type AffineTransform = readonly [number, number, number, number, number, number];

/** From the raster's coordinates to the grid's metres and back; a proj4 converter fits. */
export interface Reprojection {
  readonly forward: (xy: [number, number]) => [number, number];
  readonly inverse: (xy: [number, number]) => [number, number];
}

export interface RasterFrame {
  readonly width: number;
  readonly height: number;
  readonly transform: AffineTransform;
  /** Absent when the raster is in the grid's own system. */
  readonly toGrid?: Reprojection;
}

export interface PixelWindow {
  readonly firstCol: number;
  readonly firstRow: number;
  readonly cols: number;
  readonly rows: number;
}

/**
 * The pixels that touch the grid, with a margin in pixels; null when raster and grid do not meet. Only these need reading.
 */
export function pixelWindow(grid: GridFrame, frame: RasterFrame, marginPx = 2): PixelWindow | null {
  const toPixels = pointInPixels(grid, frame);
  let [minU, minV, maxU, maxV] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [cellU, cellV] of rimOf(grid)) {
    const [u, v] = toPixels(cellU, cellV);
    if (!Number.isFinite(u) || !Number.isFinite(v)) return null;
    minU = Math.min(minU, u);
    maxU = Math.max(maxU, u);
    minV = Math.min(minV, v);
    maxV = Math.max(maxV, v);
  }
  const firstCol = Math.max(0, Math.floor(minU) - marginPx);
  const firstRow = Math.max(0, Math.floor(minV) - marginPx);
  const cols = Math.min(frame.width, Math.ceil(maxU) + marginPx) - firstCol;
  const rows = Math.min(frame.height, Math.ceil(maxV) + marginPx) - firstRow;
  const isApart = maxU <= 0 || maxV <= 0 || minU >= frame.width || minV >= frame.height;
  return isApart || cols <= 0 || rows <= 0 ? null : { firstCol, firstRow, cols, rows };
}

/** Pixels across one cell, by area: 8 for 0.25 m pixels under 2 m cells. */
export function pixelsPerCell(grid: GridFrame, frame: RasterFrame): number {
  return 1 / Math.sqrt(pixelAreaInCells(grid, frame));
}

/** Area of a pixel in cells, at the middle of the grid. */
export function pixelAreaInCells(grid: GridFrame, frame: RasterFrame): number {
  const toPixels = pointInPixels(grid, frame);
  const [u, v] = toPixels(grid.cols / 2, grid.rows / 2);
  const [eastU, eastV] = toPixels(grid.cols / 2 + 1, grid.rows / 2);
  const [southU, southV] = toPixels(grid.cols / 2, grid.rows / 2 + 1);
  return 1 / Math.abs((eastU - u) * (southV - v) - (southU - u) * (eastV - v));
}

/** Map of pixel positions to cell positions over a window of pixels. */
export function pixelsToCells(grid: GridFrame, frame: RasterFrame, window: PixelWindow): PlaneMap {
  const { toGrid } = frame;
  const inCells = pointInCells(grid, frame);
  return toGrid === undefined ? linearMap(inCells) : latticeMap(inCells, window, 0.01);
}

/** First and last column and row of the cells that a rectangle of pixels may touch, off the grid too. Where its sides may bend they are followed at 16 places, and a cell is left for bends between them. */
export function cellsUnder(map: PlaneMap, { firstCol, firstRow, cols, rows }: PixelWindow): { firstCol: number; lastCol: number; firstRow: number; lastRow: number } {
  const place = new Float64Array(2);
  let [west, north, east, south] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [u, v] of map.isSeparable ? cornersOf({ cols, rows }) : rimOf({ cols, rows })) {
    map.row({ u: firstCol + u, v: firstRow + v, count: 1 }, place);
    west = Math.min(west, place[0]!);
    east = Math.max(east, place[0]!);
    north = Math.min(north, place[1]!);
    south = Math.max(south, place[1]!);
  }
  return { firstCol: Math.floor(west) - 1, lastCol: Math.floor(east) + 1, firstRow: Math.floor(north) - 1, lastRow: Math.floor(south) + 1 };
}

/** Map of cell positions to pixel positions over the whole grid. */
export function cellsToPixels(grid: GridFrame, frame: RasterFrame): PlaneMap {
  const inPixels = pointInPixels(grid, frame);
  const window = { firstCol: 0, firstRow: 0, cols: grid.cols, rows: grid.rows };
  return frame.toGrid === undefined ? linearMap(inPixels) : latticeMap(inPixels, window, 0.01);
}

/** One position: pixels to cells. */
function pointInCells(grid: GridFrame, { transform, toGrid }: RasterFrame): (u: number, v: number) => [number, number] {
  const [t0, t1, t2, t3, t4, t5] = transform;
  return (u, v) => {
    const own: [number, number] = [t0 + u * t1 + v * t2, t3 + u * t4 + v * t5];
    const [x, y] = toGrid === undefined ? own : toGrid.forward(own);
    return [(x - grid.x0) / grid.cellSizeM, (grid.y0 - y) / grid.cellSizeM];
  };
}

/** One position: cells to pixels. */
function pointInPixels(grid: GridFrame, { transform, toGrid }: RasterFrame): (u: number, v: number) => [number, number] {
  const [t0, t1, t2, t3, t4, t5] = transform;
  const determinant = t1 * t5 - t2 * t4;
  return (u, v) => {
    const metres: [number, number] = [grid.x0 + u * grid.cellSizeM, grid.y0 - v * grid.cellSizeM];
    const [x, y] = toGrid === undefined ? metres : toGrid.inverse(metres);
    return [((x - t0) * t5 - (y - t3) * t2) / determinant, ((y - t3) * t1 - (x - t0) * t4) / determinant];
  };
}

function cornersOf({ cols, rows }: Pick<GridFrame, 'cols' | 'rows'>): (readonly [number, number])[] {
  return [[0, 0], [cols, 0], [0, rows], [cols, rows]];
}

/** Positions along the four sides, close enough together for the bend of a map projection. */
function rimOf(grid: Pick<GridFrame, 'cols' | 'rows'>): (readonly [number, number])[] {
  const steps = 16;
  return Array.from({ length: steps + 1 }, (_, step) => step / steps).flatMap((part): (readonly [number, number])[] => [
    [part * grid.cols, 0],
    [part * grid.cols, grid.rows],
    [0, part * grid.rows],
    [grid.cols, part * grid.rows],
  ]);
}
