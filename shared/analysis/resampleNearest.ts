/**
 * Each cell takes the pixel its centre lies in: for class layers, whose numbers must not be averaged.
 * Cost: cells for the map, then for each tile the rows of cells it meets.
 */
import type { GridFrame } from './grid.ts';
import { cellsToPixels, pixelWindow, type PixelWindow, type RasterFrame } from './resampleFrame.ts';
import { readPixel } from './resampleSumsCentre.ts';
import { storedNoData, type PixelSink, type PixelTile } from './resampleTile.ts';

/** A centre on the edge of two pixels belongs to the right or lower one, rounding aside. */
const ON_EDGE = 1e-7;

export interface NearestOptions {
  readonly bands: number;
  readonly noData?: readonly (number | null)[];
}

export class NearestCells implements PixelSink {
  readonly window: PixelWindow | null;
  private readonly out: Float32Array[];
  private readonly noData: readonly (number | null)[];
  private readonly cols: number;
  /** Pixel of each cell, and the lowest and highest pixel row of each row of cells. */
  private readonly pixelCol: Int32Array;
  private readonly pixelRow: Int32Array;
  private readonly rowReach: Int32Array;

  constructor(grid: GridFrame, frame: RasterFrame, { bands, noData = [] }: NearestOptions) {
    const count = grid.cols * grid.rows;
    this.window = pixelWindow(grid, frame);
    this.out = Array.from({ length: bands }, () => new Float32Array(count).fill(NaN));
    this.noData = noData;
    this.cols = grid.cols;
    this.pixelCol = new Int32Array(count);
    this.pixelRow = new Int32Array(count);
    this.rowReach = new Int32Array(2 * grid.rows);
    const map = cellsToPixels(grid, frame);
    const places = new Float64Array(2 * grid.cols);
    for (let row = 0; row < grid.rows; row++) {
      map.row({ u: 0.5, v: row + 0.5, count: grid.cols }, places);
      for (let col = 0; col < grid.cols; col++) {
        this.pixelCol[row * grid.cols + col] = Math.floor(places[2 * col]! + ON_EDGE);
        this.pixelRow[row * grid.cols + col] = Math.floor(places[2 * col + 1]! + ON_EDGE);
      }
      const pixelRows = this.pixelRow.subarray(row * grid.cols, (row + 1) * grid.cols);
      this.rowReach[2 * row] = pixelRows.reduce((least, pixel) => Math.min(least, pixel));
      this.rowReach[2 * row + 1] = pixelRows.reduce((most, pixel) => Math.max(most, pixel));
    }
  }

  add(tile: PixelTile): void {
    const noData = storedNoData(tile, this.noData);
    const pixel = new Float64Array(this.out.length);
    for (let row = 0; 2 * row < this.rowReach.length; row++) {
      if (this.rowReach[2 * row + 1]! < tile.firstRow || this.rowReach[2 * row]! >= tile.firstRow + tile.rows) continue;
      for (let cell = row * this.cols; cell < (row + 1) * this.cols; cell++) {
        const right = this.pixelCol[cell]! - tile.firstCol;
        const down = this.pixelRow[cell]! - tile.firstRow;
        if (right < 0 || right >= tile.cols || down < 0 || down >= tile.rows) continue;
        if (!readPixel(tile, down * tile.storedCols + right, { noData, pixel })) continue;
        for (let band = 0; band < this.out.length; band++) this.out[band]![cell] = pixel[band]!;
      }
    }
  }

  cells(): Float32Array[] {
    return this.out;
  }
}
