/**
 * Cell values from canopy pixels alone. Which pixel is canopy is told by a threshold on its index (one a block, canopyKinds)
 * or by its distance to a vine row. Used in two passes over the pixels for the threshold (`addToHistogram` for
 * all, `settle`, then `add` for all), in one for rows. Fine pixels only: each counts in the cell of its centre.
 * In: tiles. Out: band means of canopy per cell. Memory: cells × (bands + 2) doubles and one histogram.
 */
import { CanopyKinds, type CanopyThreshold } from './canopyKinds.ts';
import type { Grid } from './grid.ts';
import { pixelAreaInCells, pixelsToCells, pixelWindow, type PixelWindow, type RasterFrame } from './resampleFrame.ts';
import type { PlaneMap } from './resampleMap.ts';
import { readPixel } from './resampleSumsCentre.ts';
import { storedNoData, type PixelSink, type PixelTile } from './resampleTile.ts';

export interface CanopyOptions {
  readonly bands: number;
  readonly noData: readonly (number | null)[];
  /** Index of one pixel from its stored bands; NaN where it has none. */
  readonly indexOf: (pixel: Float64Array) => number;
  /** True for grid positions on a vine row; null: the threshold tells. */
  readonly isOnRow: ((x: number, y: number) => boolean) | null;
  /** A cell without canopy of its own takes the canopy up to this far away. */
  readonly reachM: number;
}

export interface CanopyFigures {
  /** Index above which a pixel is canopy; null for rows. */
  readonly threshold: number | null;
  /** How apart canopy and alleys are, 0…1 (Otsu's measure); for rows how far the strips lie above the alleys, in standard deviations. */
  readonly separability: number;
  /** Share of the block's pixels that are canopy, 0…1. */
  readonly share: number;
  /** How full the valley at the threshold is, and which kinds it parts; null for rows. */
  readonly split: Pick<CanopyThreshold, 'valley' | 'kinds'> | null;
}

export class CanopyCells implements PixelSink {
  readonly window: PixelWindow | null;
  private readonly grid: Grid;
  private readonly options: CanopyOptions;
  private readonly map: PlaneMap | null;
  private readonly cellsAPixel: number;
  private readonly kinds: CanopyKinds;
  private readonly sums: Float64Array;
  private found: CanopyThreshold | null = null;
  /** Number, sum and squares of the index of canopy and other pixels inside. */
  private readonly moments = { canopy: [0, 0, 0], other: [0, 0, 0] };

  constructor(grid: Grid, frame: RasterFrame, options: CanopyOptions) {
    this.grid = grid;
    this.options = options;
    this.window = pixelWindow(grid, frame);
    this.map = this.window === null ? null : pixelsToCells(grid, frame, this.window);
    this.cellsAPixel = this.window === null ? 0 : pixelAreaInCells(grid, frame);
    this.kinds = new CanopyKinds(grid, options.reachM);
    this.sums = new Float64Array(grid.cols * grid.rows * (options.bands + 2));
  }

  get needsHistogram(): boolean {
    return this.options.isOnRow === null;
  }

  addToHistogram(tile: PixelTile): void {
    this.eachPixel(tile, ({ cell, index }) => {
      if (this.grid.inside[cell] === 1) this.kinds.add(cell, index);
    });
  }

  /** Ends the first pass. */
  settle(): void {
    this.found = this.kinds.settle();
  }

  add(tile: PixelTile): void {
    const { bands, isOnRow } = this.options;
    const { grid, sums } = this;
    const count = grid.cols * grid.rows;
    const threshold = this.found?.threshold ?? -Infinity;
    this.eachPixel(tile, ({ cell, index, pixel, u, v }) => {
      sums[(bands + 1) * count + cell]! += 1;
      const isCanopy = isOnRow === null ? index >= threshold : isOnRow(grid.x0 + u * grid.cellSizeM, grid.y0 - v * grid.cellSizeM);
      if (grid.inside[cell] === 1) addMoment(isCanopy ? this.moments.canopy : this.moments.other, index);
      if (!isCanopy) return;
      for (let band = 0; band < bands; band++) sums[band * count + cell]! += pixel[band]!;
      sums[bands * count + cell]! += 1;
    });
  }

  /** Mean of each band over the canopy of a cell, or of the canopy next to it; NaN where there is none near. */
  cells(): Float32Array[] {
    const { bands, reachM } = this.options;
    const { cols, rows, cellSizeM } = this.grid;
    const count = cols * rows;
    const out = Array.from({ length: bands }, () => new Float32Array(count).fill(NaN));
    const reach = Math.ceil(reachM / cellSizeM);
    const pooled = new Float64Array(bands + 1);
    for (let cell = 0; cell < count; cell++) {
      if (this.sums[(bands + 1) * count + cell] === 0) continue;
      pooled.fill(0);
      this.pool(pooled, cell, 0);
      for (let ring = 1; pooled[bands] === 0 && ring <= reach; ring++) this.pool(pooled, cell, ring);
      if (pooled[bands]! > 0) for (let band = 0; band < bands; band++) out[band]![cell] = pooled[band]! / pooled[bands]!;
    }
    return out;
  }

  /** Share of each cell's area under pixels with data, canopy or not, 0…1. */
  covered(): Float32Array {
    const seen = this.sums.subarray((this.options.bands + 1) * this.grid.cols * this.grid.rows);
    return Float32Array.from(seen, (pixels) => Math.min(1, pixels * this.cellsAPixel));
  }

  figures(): CanopyFigures {
    const { canopy, other } = this.moments;
    const [number, others] = [canopy[0]!, other[0]!];
    const isByRows = this.options.isOnRow !== null;
    const share = number + others === 0 ? 0 : number / (number + others);
    if (isByRows) return { threshold: null, separability: standardisedDifference(canopy, other), share, split: null };
    const { threshold = -Infinity, separability = NaN, valley = 1, kinds = 'two' } = this.found ?? {};
    return { threshold, separability, share, split: { valley, kinds } };
  }

  /** Adds the sums of the cells at a distance of `ring` cells, within the reach. */
  private pool(pooled: Float64Array, cell: number, ring: number): void {
    const { cols, rows } = this.grid;
    const count = cols * rows;
    const [col, row] = [cell % cols, Math.floor(cell / cols)];
    for (let down = -ring; down <= ring; down++) {
      const step = Math.abs(down) === ring || ring === 0 ? 1 : 2 * ring;
      for (let across = -ring; across <= ring; across += step) {
        if (col + across < 0 || col + across >= cols || row + down < 0 || row + down >= rows) continue;
        const other = cell + down * cols + across;
        for (let band = 0; band < pooled.length; band++) pooled[band]! += this.sums[band * count + other]!;
      }
    }
  }

  private eachPixel(tile: PixelTile, visit: (at: { cell: number; index: number; pixel: Float64Array; u: number; v: number }) => void): void {
    if (this.window === null || this.map === null) return;
    const { firstCol, firstRow, cols, rows } = this.window;
    const noData = storedNoData(tile, this.options.noData);
    const fromCol = Math.max(tile.firstCol, firstCol);
    const count = Math.min(tile.firstCol + tile.cols, firstCol + cols) - fromCol;
    if (count <= 0) return;
    const places = new Float64Array(2 * count);
    const at = { cell: 0, index: 0, pixel: new Float64Array(this.options.bands), u: 0, v: 0 };
    for (let row = Math.max(tile.firstRow, firstRow); row < Math.min(tile.firstRow + tile.rows, firstRow + rows); row++) {
      this.map.row({ u: fromCol + 0.5, v: row + 0.5, count }, places);
      const lineStart = (row - tile.firstRow) * tile.storedCols + fromCol - tile.firstCol;
      for (let i = 0; i < count; i++) {
        const [u, v] = [places[2 * i]!, places[2 * i + 1]!];
        if (u < 0 || u >= this.grid.cols || v < 0 || v >= this.grid.rows) continue;
        const cell = Math.floor(v) * this.grid.cols + Math.floor(u);
        if (!(this.grid.share[cell]! > 0) || !readPixel(tile, lineStart + i, { noData, pixel: at.pixel })) continue;
        const index = this.options.indexOf(at.pixel);
        if (Number.isNaN(index)) continue;
        [at.cell, at.index, at.u, at.v] = [cell, index, u, v];
        visit(at);
      }
    }
  }
}

function addMoment(moments: number[], value: number): void {
  moments[0]! += 1;
  moments[1]! += value;
  moments[2]! += value * value;
}

/** Difference of two means over the pooled standard deviation (Cohen 1988, from memory); NaN where one has no pixels. */
function standardisedDifference(high: readonly number[], low: readonly number[]): number {
  const mean = ([n, sum]: readonly number[]) => sum! / n!;
  const variance = ([n, sum, squares]: readonly number[]) => Math.max(0, squares! / n! - (sum! / n!) ** 2);
  const pooled = (variance(high) * high[0]! + variance(low) * low[0]!) / (high[0]! + low[0]!);
  return (mean(high) - mean(low)) / Math.sqrt(Math.max(1e-12, pooled));
}
