import type { Grid } from '../../../shared/analysis/grid.ts';
import { INDICES, indexCells, type BandName, type IndexId } from '../../../shared/analysis/indices.ts';
import { resampler, type ResampleMethod, type WindowedSink } from '../../../shared/analysis/resample.ts';
import { CellSums } from '../../../shared/analysis/resampleSums.ts';
import type { BandMeans } from '../../../shared/analysis/sceneFitness.ts';
import { naming } from '../importProblem.ts';
import type { RasterUnderstood } from '../understood.ts';
import { describeOpen, type RasterReadOptions } from './describeRaster.ts';
import { bandsOf, feed, frameOn, noDataOf, notOverlapping, noValues, scaled } from './gridPass.ts';
import type { OpenRaster } from './openRaster.ts';
import { openPicture, type PictureReader } from './pictureBlocks.ts';
import { withRaster } from './withRaster.ts';

/** What to take from the file: one band, or an index of bands, which are averaged first. Bands count from 1. */
export type RasterQuantity =
  | { readonly kind: 'band'; readonly band: number; readonly method: ResampleMethod }
  | { readonly kind: 'index'; readonly index: IndexId; readonly bands: Partial<Record<BandName, number>> };

export interface RasterOntoGridsRequest {
  readonly quantity: RasterQuantity;
  readonly grids: readonly Grid[];
  /** Number that means "no data" instead of the file's own; null: every value counts; undefined: as the file says. */
  readonly noData?: number | null;
  /** Cells with a smaller share under pixels with data are missing. */
  readonly minCoverage?: number;
  /** Part done, 0…1. */
  readonly onProgress?: (done: number) => void;
  readonly signal?: AbortSignal;
  /** Rows of blocks are shared with other threads that read parts of the same picture. */
  readonly shared?: SharedPicture;
}

/** A picture whose rows of blocks are taken one after the other by whoever is free. */
export interface SharedPicture {
  /** One number in shared memory: how many bands of rows have been taken. */
  readonly taken: Int32Array;
  /** Called when no row is left; the sums of the others, if any. */
  readonly others: () => Promise<PictureSums>;
}

/** Sums of each grid from the rows that a thread took; null when the picture cannot be shared. */
export type PictureSums = readonly Float64Array[] | null;

export interface GridReading {
  readonly gridKey: string;
  /** Value per cell, NaN where missing. */
  readonly cells: Float32Array;
  /** Share of each cell under pixels with data, 0…1. */
  readonly covered: Float32Array;
  /** The picture reaches this grid at all. */
  readonly reaches: boolean;
  /** Mean of each band that the index was made of; null for a band as it is. */
  readonly bandMeans: BandMeans | null;
}

/**
 * Reads a raster onto the grids of several blocks in one pass, tile by tile, only where blocks lie; memory does not grow
 * with the picture. Throws ImportProblem: an open reference question, no overlap (with the distance), all missing, damage.
 */
export function readRasterOntoGrids(input: string | Uint8Array, options: RasterReadOptions, request: RasterOntoGridsRequest): Promise<GridReading[]> {
  return naming(options.fileName, () =>
    withRaster(input, options, async (raster, own) => {
      const { understood, bands, sinks, reader } = await openOntoGrids(raster, own, request);
      const { shared } = request;
      const isShared = shared !== undefined && isExactInAnyOrder(raster, sinks);
      await feed(reader, sinks, { ...request, taken: isShared ? shared.taken : undefined });
      const others = await shared?.others();
      if (isShared) others?.forEach((sums, at) => (sinks[at] as CellSums).addPartSums(sums));
      const readings = request.grids.map((grid, at) => finish(grid, sinks[at]!, { understood, bands, request }));
      if (readings.every(({ cells }) => cells.every(Number.isNaN))) throw noValues(readings.length);
      return readings;
    }),
  );
}

/** The sums of those rows of blocks that nobody else takes, for `SharedPicture.others` of another thread. */
export function readSharedRows(input: string, options: RasterReadOptions, { taken, ...request }: RasterOntoGridsRequest & { readonly taken: Int32Array }): Promise<PictureSums> {
  return naming(options.fileName, () =>
    withRaster(input, options, async (raster, own) => {
      const { sinks, reader } = await openOntoGrids(raster, own, request);
      if (!isExactInAnyOrder(raster, sinks)) return null;
      await feed(reader, sinks, { ...request, taken });
      return sinks.map((sink) => (sink as CellSums).partSums());
    }),
  );
}

interface OpenOntoGrids {
  readonly understood: RasterUnderstood;
  readonly bands: readonly number[];
  readonly sinks: readonly WindowedSink[];
  readonly reader: PictureReader;
}

async function openOntoGrids(raster: OpenRaster, options: RasterReadOptions, request: RasterOntoGridsRequest): Promise<OpenOntoGrids> {
  const understood = describeOpen(raster, options);
  const bands = bandsOf(request.quantity, understood);
  const noData = noDataOf(bands, understood, request.noData);
  const method = request.quantity.kind === 'band' ? request.quantity.method : 'mean';
  const sinks = request.grids.map((grid) => resampler(grid, frameOn(grid, understood), { method, bands: bands.length, noData }));
  if (sinks.every((sink) => sink.window === null)) throw notOverlapping(understood, request.grids);
  const unmarked = noData[0] === null;
  const reader = await openPicture(raster, { bands, alphaBand: understood.alphaBand, dropHuge: unmarked, dropDark: unmarked && request.quantity.kind === 'index' && raster.mask === null });
  return { understood, bands, sinks, reader };
}

/** Sums of whole numbers below 2⁵³ have no rounding, so it does not matter who adds which rows. */
function isExactInAnyOrder({ layout }: OpenRaster, sinks: readonly WindowedSink[]): boolean {
  return layout.format !== 'float' && layout.bits <= 16 && sinks.every((sink) => sink instanceof CellSums && sink.isByCentre);
}

interface Finishing {
  understood: RasterUnderstood;
  bands: readonly number[];
  request: RasterOntoGridsRequest;
}

/** Mean of each band in true units, index from the means, thinly covered cells dropped. */
function finish(grid: Grid, sink: WindowedSink, { understood, bands, request: { quantity, minCoverage = 0.5 } }: Finishing): GridReading {
  const means = sink.cells().map((cells, i) => scaled(cells, understood.bands.find((band) => band.index === bands[i])!));
  const bandMeans: BandMeans | null = quantity.kind === 'band' ? null : Object.fromEntries(INDICES[quantity.index].bands.map((name, i) => [name, means[i]!]));
  const values = quantity.kind === 'band' ? means[0]! : indexCells(quantity.index, bandMeans!);
  const covered = sink instanceof CellSums ? sink.covered() : values.map((value) => (Number.isNaN(value) ? 0 : 1));
  const cells = values.slice();
  for (let cell = 0; cell < cells.length; cell++) if (covered[cell]! + 1e-6 < minCoverage) cells[cell] = NaN;
  return { gridKey: grid.key, cells, covered, reaches: sink.window !== null, bandMeans };
}
