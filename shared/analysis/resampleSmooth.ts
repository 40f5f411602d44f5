/**
 * Each cell takes the value at its centre on the surface through the pixel centres (bilinear interpolation): for elevation
 * from pixels coarser than the cells, where plain pixels would give terraces and a slope of 0 with cliffs between.
 * Holds the pixels around the grid, which are few because they are coarse. Missing pixels are left out of the mix; a cell
 * with less than half of its weight on pixels with data is missing.
 */
import type { GridFrame } from './grid.ts';
import { cellsToPixels, pixelWindow, type PixelWindow, type RasterFrame } from './resampleFrame.ts';
import type { PlaneMap } from './resampleMap.ts';
import { readPixel } from './resampleSumsCentre.ts';
import { storedNoData, type PixelSink, type PixelTile } from './resampleTile.ts';

export interface SmoothCellsOptions {
  readonly bands: number;
  readonly noData?: readonly (number | null)[];
}

export class SmoothCells implements PixelSink {
  readonly window: PixelWindow | null;
  private readonly grid: GridFrame;
  private readonly map: PlaneMap;
  private readonly frame: RasterFrame;
  private readonly noData: readonly (number | null)[];
  private readonly pixels: Float32Array[];

  constructor(grid: GridFrame, frame: RasterFrame, { bands, noData = [] }: SmoothCellsOptions) {
    this.window = pixelWindow(grid, frame);
    const count = this.window === null ? 0 : this.window.cols * this.window.rows;
    this.grid = grid;
    this.frame = frame;
    this.map = cellsToPixels(grid, frame);
    this.noData = noData;
    this.pixels = Array.from({ length: bands }, () => new Float32Array(count).fill(NaN));
  }

  add(tile: PixelTile): void {
    if (this.window === null) return;
    const { firstCol, firstRow, cols, rows } = this.window;
    const noData = storedNoData(tile, this.noData);
    const pixel = new Float64Array(this.pixels.length);
    for (let row = Math.max(firstRow, tile.firstRow); row < Math.min(firstRow + rows, tile.firstRow + tile.rows); row++) {
      for (let col = Math.max(firstCol, tile.firstCol); col < Math.min(firstCol + cols, tile.firstCol + tile.cols); col++) {
        if (!readPixel(tile, (row - tile.firstRow) * tile.storedCols + col - tile.firstCol, { noData, pixel })) continue;
        for (let band = 0; band < this.pixels.length; band++) this.pixels[band]![(row - firstRow) * cols + col - firstCol] = pixel[band]!;
      }
    }
  }

  cells(): Float32Array[] {
    const { cols, rows } = this.grid;
    const out = this.pixels.map(() => new Float32Array(cols * rows).fill(NaN));
    if (this.window === null) return out;
    const places = new Float64Array(2 * cols);
    for (let row = 0; row < rows; row++) {
      this.map.row({ u: 0.5, v: row + 0.5, count: cols }, places);
      for (let col = 0; col < cols; col++) {
        const [u, v] = [places[2 * col]!, places[2 * col + 1]!];
        if (u < 0 || v < 0 || u > this.frame.width || v > this.frame.height) continue;
        out.forEach((cells, band) => (cells[row * cols + col] = mixAt(this.pixels[band]!, this.window!, [u - 0.5, v - 0.5])));
      }
    }
    return out;
  }
}

/** Value at a position counted from pixel centre to pixel centre; beyond the outermost centres the outermost pixel holds. */
function mixAt(pixels: Float32Array, { firstCol, firstRow, cols, rows }: PixelWindow, [u, v]: readonly [number, number]): number {
  const across = Math.min(cols - 1, Math.max(0, u - firstCol));
  const down = Math.min(rows - 1, Math.max(0, v - firstRow));
  const col = Math.min(Math.floor(across), Math.max(0, cols - 2));
  const row = Math.min(Math.floor(down), Math.max(0, rows - 2));
  let sum = 0;
  let weights = 0;
  for (let corner = 0; corner < 4; corner++) {
    const [right, below] = [corner & 1, corner >> 1];
    const weight = Math.abs(1 - right - (across - col)) * Math.abs(1 - below - (down - row));
    const value = pixels[(row + below) * cols + col + right] ?? NaN;
    if (weight === 0 || Number.isNaN(value)) continue;
    sum += weight * value;
    weights += weight;
  }
  return weights >= 0.5 ? sum / weights : NaN;
}
