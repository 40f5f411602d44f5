/** Pixels as they come from a file, tile by tile or strip by strip. */

/** Any typed array of samples, or plain numbers. */
export type Samples = ArrayLike<number>;

export interface TileBand {
  readonly values: Samples;
  /** Index of the band's first sample, and samples from one pixel to the next: 1 and 4 for the second of four interleaved bands. */
  readonly offset: number;
  readonly stride: number;
}

export interface PixelTile {
  /** Place in the raster; `cols` and `rows` count the pixels that belong to the raster, without padding. */
  readonly firstCol: number;
  readonly firstRow: number;
  readonly cols: number;
  readonly rows: number;
  /** Pixels from one stored row to the next, padding included. */
  readonly storedCols: number;
  readonly bands: readonly TileBand[];
}

/**
 * The number that stands for "no data" in each band, null where there is none. It is compared as the file stores it: a
 * float32 sample never equals a no-data value with more digits than float32 holds.
 */
export function storedNoData(tile: PixelTile, noData: readonly (number | null)[]): number[] {
  return tile.bands.map(({ values }, band) => {
    const value = noData[band] ?? NaN;
    return values instanceof Float32Array ? Math.fround(value) : value;
  });
}

/** Takes tiles in any order and gives one array of cells per band at the end; NaN where a cell got nothing. */
export interface PixelSink {
  add(tile: PixelTile): void;
  cells(): Float32Array[];
}
