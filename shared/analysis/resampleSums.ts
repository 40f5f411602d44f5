/**
 * Averages the pixels of a raster onto the cells of a grid, tile by tile, without holding the raster.
 * A pixel with no data, NaN or infinity in any band counts in none. Bands are averaged; an index is taken afterwards.
 * Fine pixels (four or more across a cell) count in the cell their centre lies in; coarser ones in every cell by the area
 * they share with it. Whole-number samples are summed exactly whatever the order of tiles; float samples in tile order.
 * Cost: pixels × bands; memory: cells × (bands + 1) doubles.
 */
import type { GridFrame } from './grid.ts';
import { cellsUnder, pixelAreaInCells, pixelsPerCell, pixelsToCells, pixelWindow, type PixelWindow, type RasterFrame } from './resampleFrame.ts';
import type { PlaneMap } from './resampleMap.ts';
import { addByCentre, addByCentreTable, centreTables, type CentreTables } from './resampleSumsCentre.ts';
import { addByQuad } from './resampleSumsQuad.ts';
import { addByOverlap, overlapTables, type OverlapTables } from './resampleSumsOverlap.ts';
import { storedNoData, type PixelSink, type PixelTile } from './resampleTile.ts';

export interface SumsOptions {
  readonly bands: number;
  /** Number that means "no data" in each band, null for none. */
  readonly noData?: readonly (number | null)[];
  /** auto: by centre from four pixels across a cell on, by area below that. */
  readonly weighting?: 'auto' | 'centre' | 'area';
  /** Share of each cell that lies in the block; pixels over cells without any need no reading. All cells count when absent. */
  readonly ground?: ArrayLike<number>;
}

/** Sums of each band and of the weight, one after the other: band b of a cell is at b · cells + cell, the weight comes last. */
export interface SumTable {
  readonly values: Float64Array;
  readonly bands: number;
  readonly cols: number;
  readonly rows: number;
}

/** Pixels [fromCol, toCol) × [fromRow, toRow) of a tile that may touch the grid, in raster positions. */
export interface TilePart {
  readonly tile: PixelTile;
  readonly noData: readonly number[];
  readonly fromCol: number;
  readonly toCol: number;
  readonly fromRow: number;
  readonly toRow: number;
}

/** Any way to add pixels to sums; chosen once per raster. */
type AddPart = (sums: SumTable, part: TilePart) => void;

export class CellSums implements PixelSink {
  /** Pixels that need reading; null when the raster does not touch the grid. */
  readonly window: PixelWindow | null;
  private readonly sums: SumTable;
  private readonly noData: readonly (number | null)[];
  private readonly addPart: AddPart;
  private readonly weightOfPixel: number;
  private readonly byCentre: boolean;
  private readonly map: PlaneMap | null;
  private readonly ground: ArrayLike<number> | null;

  constructor(grid: GridFrame, frame: RasterFrame, { bands, noData = [], weighting = 'auto', ground }: SumsOptions) {
    this.window = pixelWindow(grid, frame);
    this.sums = { values: new Float64Array(grid.cols * grid.rows * (bands + 1)), bands, cols: grid.cols, rows: grid.rows };
    this.noData = noData;
    this.byCentre = weighting === 'centre' || (weighting === 'auto' && pixelsPerCell(grid, frame) > 3.999);
    this.weightOfPixel = this.byCentre && this.window !== null ? pixelAreaInCells(grid, frame) : 1;
    this.map = this.window === null ? null : pixelsToCells(grid, frame, this.window);
    this.ground = ground ?? null;
    this.addPart = this.window === null || this.map === null ? () => undefined : wayToAdd(grid, this.map, { byCentre: this.byCentre, window: this.window });
  }

  /** May pixels of this rectangle touch a cell with ground in it? */
  needs(place: PixelWindow): boolean {
    if (this.window === null || this.map === null) return false;
    if (this.ground === null) return true;
    const { cols, rows } = this.sums;
    const cells = cellsUnder(this.map, place);
    for (let row = Math.max(0, cells.firstRow); row <= Math.min(rows - 1, cells.lastRow); row++) {
      for (let col = Math.max(0, cells.firstCol); col <= Math.min(cols - 1, cells.lastCol); col++) if (this.ground[row * cols + col]! > 0) return true;
    }
    return false;
  }

  add(tile: PixelTile): void {
    if (this.window === null) return;
    const { firstCol, firstRow, cols, rows } = this.window;
    this.addPart(this.sums, {
      tile,
      noData: storedNoData(tile, this.noData),
      fromCol: Math.max(tile.firstCol, firstCol),
      toCol: Math.min(tile.firstCol + tile.cols, firstCol + cols),
      fromRow: Math.max(tile.firstRow, firstRow),
      toRow: Math.min(tile.firstRow + tile.rows, firstRow + rows),
    });
  }

  /** Whole-number pixels that count in one cell each add up to the same sums in any order. */
  get isByCentre(): boolean {
    return this.byCentre;
  }

  /** The sums so far, which another object for the same raster and grid can take over. */
  partSums(): Float64Array {
    return this.sums.values;
  }

  addPartSums(values: Float64Array): void {
    const own = this.sums.values;
    for (let at = 0; at < own.length; at++) own[at]! += values[at]!;
  }

  /** Mean of each band per cell; NaN where no pixel with data touched the cell. */
  cells(): Float32Array[] {
    const { values, bands, cols, rows } = this.sums;
    const count = cols * rows;
    return Array.from({ length: bands }, (_, band) => {
      const means = new Float32Array(count);
      for (let cell = 0; cell < count; cell++) {
        const weight = values[bands * count + cell]!;
        means[cell] = weight > 1e-9 ? values[band * count + cell]! / weight : NaN;
      }
      return means;
    });
  }

  /** Share of each cell's area under pixels with data, 0…1. */
  covered(): Float32Array {
    const { values, bands, cols, rows } = this.sums;
    const shares = new Float32Array(cols * rows);
    for (let cell = 0, at = bands * cols * rows; cell < shares.length; cell++, at++) shares[cell] = Math.min(1, values[at]! * this.weightOfPixel);
    return shares;
  }
}

function wayToAdd(grid: GridFrame, map: PlaneMap, { byCentre, window }: { byCentre: boolean; window: PixelWindow }): AddPart {
  if (byCentre && !map.isSeparable) return (sums, part) => addByCentre(sums, part, map);
  if (!map.isSeparable) return (sums, part) => addByQuad(sums, part, map);
  if (byCentre) {
    const tables: CentreTables = centreTables(grid, map, window);
    return (sums, part) => addByCentreTable(sums, part, tables);
  }
  const tables: OverlapTables = overlapTables(grid, map, window);
  return (sums, part) => addByOverlap(sums, part, tables);
}
