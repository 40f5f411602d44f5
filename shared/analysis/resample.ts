/**
 * Rasters onto a block's grid. The importer asks for a sink, reads the pixels of its window in any tiling and adds them:
 * `const sink = resampler(grid, frame, { method: 'mean', bands: 2, noData: [0, 0] }); … sink.add(tile); … sink.cells()`.
 */
import type { Grid, GridFrame } from './grid.ts';
import { pixelsPerCell, type PixelWindow, type RasterFrame } from './resampleFrame.ts';
import { NearestCells } from './resampleNearest.ts';
import { SmoothCells } from './resampleSmooth.ts';
import { CellSums } from './resampleSums.ts';
import type { PixelSink } from './resampleTile.ts';

/** mean: by area, for measured values. nearest: for classes. surface: for elevation, smooth where pixels are coarse. */
export type ResampleMethod = 'mean' | 'nearest' | 'surface';

export interface ResampleOptions {
  readonly method: ResampleMethod;
  readonly bands: number;
  /** Number that means "no data" in each band, null for none. */
  readonly noData?: readonly (number | null)[];
}

export interface WindowedSink extends PixelSink {
  /** Pixels that need reading; null when the raster does not touch the grid. */
  readonly window: PixelWindow | null;
  /** May a rectangle of pixels matter to a cell with ground in it? Absent: every pixel of the window does. */
  needs?(place: PixelWindow): boolean;
}

/** A grid, of whose cells only those with ground in them matter where it says so; a slope asks its neighbours too. */
type Ground = GridFrame & Partial<Pick<Grid, 'share'>>;

const METHODS: Record<ResampleMethod, (grid: Ground, frame: RasterFrame, options: ResampleOptions) => WindowedSink> = {
  mean: (grid, frame, options) => new CellSums(grid, frame, grid.share === undefined ? options : { ...options, ground: grid.share }),
  nearest: (grid, frame, options) => new NearestCells(grid, frame, options),
  surface: (grid, frame, options) =>
    // By area even for fine pixels: counting by centres would shake a slope by half a pixel from cell to cell.
    pixelsPerCell(grid, frame) < 1.5 ? new SmoothCells(grid, frame, options) : new CellSums(grid, frame, { ...options, weighting: 'area' }),
};

export function resampler(grid: Ground, frame: RasterFrame, options: ResampleOptions): WindowedSink {
  return METHODS[options.method](grid, frame, options);
}
