import type { Grid } from '../../../shared/analysis/grid.ts';
import { INDICES, indexCells, type BandName, type IndexId } from '../../../shared/analysis/indices.ts';
import { resampler, type ResampleMethod, type WindowedSink } from '../../../shared/analysis/resample.ts';
import type { RasterFrame } from '../../../shared/analysis/resampleFrame.ts';
import { CellSums } from '../../../shared/analysis/resampleSums.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { ImportProblem, naming } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { distanceKm } from '../reference/distance.ts';
import { reprojectionTo } from '../reference/referenceSystem.ts';
import type { RasterUnderstood } from '../understood.ts';
import { describeOpen, type RasterReadOptions } from './describeRaster.ts';
import type { OpenRaster } from './openRaster.ts';
import { openPicture, type PictureReader } from './pictureBlocks.ts';
import { at } from './pixelTransform.ts';
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
  const noData = bands.map((index) => (request.noData === undefined ? (understood.bands.find((band) => band.index === index)!.noData) : request.noData));
  const sinks = request.grids.map((grid) => sinkOf(grid, understood, { method: request.quantity.kind === 'band' ? request.quantity.method : 'mean', bands: bands.length, noData }));
  if (sinks.every((sink) => sink.window === null)) throw notOverlapping(understood, request.grids);
  const unmarked = noData[0] === null;
  const reader = await openPicture(raster, { bands, alphaBand: understood.alphaBand, dropHuge: unmarked, dropDark: unmarked && request.quantity.kind === 'index' && raster.mask === null });
  return { understood, bands, sinks, reader };
}

/** Sums of whole numbers below 2⁵³ have no rounding, so it does not matter who adds which rows. */
function isExactInAnyOrder({ layout }: OpenRaster, sinks: readonly WindowedSink[]): boolean {
  return layout.format !== 'float' && layout.bits <= 16 && sinks.every((sink) => sink instanceof CellSums && sink.isByCentre);
}

/** Band numbers to read, in the order of the index's formula. */
function bandsOf(quantity: RasterQuantity, understood: RasterUnderstood): number[] {
  const wanted = quantity.kind === 'band' ? [['value', quantity.band] as const] : INDICES[quantity.index].bands.map((name) => [name, quantity.bands[name]] as const);
  return wanted.map(([name, band]) => {
    if (band !== undefined && understood.bands.some((each) => each.index === band)) return band;
    const listed = understood.bands.map((each) => each.index).join(', ');
    throw new ImportProblem({ code: 'bad-request', fact: band === undefined ? `It is not said which band is ${name}.` : `It has no band ${band} of values.`, remedy: `Choose from its bands: ${listed}.`, params: { band: band ?? name, listed } });
  });
}

function sinkOf(grid: Grid, understood: RasterUnderstood, options: { method: ResampleMethod; bands: number; noData: readonly (number | null)[] }): WindowedSink {
  const question = understood.questions.find(({ code }) => code === 'reference-system');
  if (understood.reference === null || understood.transform === null) {
    throw new ImportProblem({ code: 'no-reference', fact: question?.text ?? 'Its reference system is not known.', remedy: 'Answer the question about its reference system first.' });
  }
  const middle = at(understood.transform, understood.width / 2, understood.height / 2);
  const toGrid = reprojectionTo(understood.reference, grid.epsg, middle);
  const frame: RasterFrame = { width: understood.width, height: understood.height, transform: understood.transform, ...(toGrid === undefined ? {} : { toGrid }) };
  return resampler(grid, frame, options);
}

/** Rows of pixels that a thread takes at once when several read one picture. */
const SHARED_ROWS = 64;

type FeedOptions = Pick<RasterOntoGridsRequest, 'onProgress' | 'signal'> & { readonly taken?: Int32Array | undefined };

/** Decodes every block of pixels that some grid needs once, and gives it to each of these grids. */
async function feed(reader: PictureReader, sinks: readonly WindowedSink[], { onProgress, signal, taken }: FeedOptions): Promise<void> {
  const { blockWidth, blockHeight } = reader.layout;
  const needed = neededBlocks(reader, sinks);
  const pixels = needed.reduce((sum, row) => sum + row.length, 0) * blockWidth * blockHeight;
  if (pixels > limits.rasterPixels) {
    throw new ImportProblem({ code: 'too-large', fact: `${Math.round(pixels / 1e6)} million pixels lie over the blocks; ${limits.rasterPixels / 1e6} million is the most.`, remedy: 'Export it with larger pixels; 0.1 m is fine enough for vine rows.', params: { millionPixels: Math.round(pixels / 1e6) } });
  }
  const rowsAtOnce = Math.ceil(SHARED_ROWS / blockHeight);
  let own = 0;
  const next = () => (taken === undefined ? own++ : Atomics.add(taken, 0, 1));
  for (let band = next(); band * rowsAtOnce < needed.length; band = next()) {
    for (const { blockCol, blockRow, takers } of needed.slice(band * rowsAtOnce, (band + 1) * rowsAtOnce).flat()) {
      const tile = reader.read(blockCol, blockRow);
      if (tile !== null) for (const taker of takers) taker.add(tile);
    }
    // Lets progress and cancelling through; the reading itself never waits.
    await new Promise((resume) => setImmediate(resume));
    signal?.throwIfAborted();
    onProgress?.(Math.min(1, ((band + 1) * rowsAtOnce) / needed.length));
  }
  onProgress?.(1);
}

interface NeededBlock {
  readonly blockCol: number;
  readonly blockRow: number;
  readonly takers: readonly WindowedSink[];
}

/** Blocks over some grid, row by row; rows without any are left out. */
function neededBlocks({ layout: { blockWidth, blockHeight, blocksAcross, blocksDown } }: PictureReader, sinks: readonly WindowedSink[]): NeededBlock[][] {
  const needed: NeededBlock[][] = [];
  for (let blockRow = 0; blockRow < blocksDown; blockRow++) {
    const inRow = sinks.filter(({ window }) => window !== null && window.firstRow < (blockRow + 1) * blockHeight && window.firstRow + window.rows > blockRow * blockHeight);
    const row: NeededBlock[] = [];
    for (let blockCol = 0; inRow.length > 0 && blockCol < blocksAcross; blockCol++) {
      const takers = inRow.filter(({ window }) => window!.firstCol < (blockCol + 1) * blockWidth && window!.firstCol + window!.cols > blockCol * blockWidth);
      if (takers.length > 0) row.push({ blockCol, blockRow, takers });
    }
    if (row.length > 0) needed.push(row);
  }
  return needed;
}

interface Finishing {
  understood: RasterUnderstood;
  bands: readonly number[];
  request: RasterOntoGridsRequest;
}

/** Mean of each band in true units, index from the means, thinly covered cells dropped. */
function finish(grid: Grid, sink: WindowedSink, { understood, bands, request: { quantity, minCoverage = 0.5 } }: Finishing): GridReading {
  const means = sink.cells().map((cells, i) => scaled(cells, understood.bands.find((band) => band.index === bands[i])!));
  const values = quantity.kind === 'band' ? means[0]! : indexCells(quantity.index, Object.fromEntries(INDICES[quantity.index].bands.map((name, i) => [name, means[i]!])));
  const covered = sink instanceof CellSums ? sink.covered() : values.map((value) => (Number.isNaN(value) ? 0 : 1));
  const cells = values.map((value, cell) => (covered[cell]! + 1e-6 < minCoverage ? NaN : value));
  return { gridKey: grid.key, cells, covered, reaches: sink.window !== null };
}

function scaled(cells: Float32Array, { scale, offset }: { scale: number; offset: number }): Float32Array {
  return scale === 1 && offset === 0 ? cells : cells.map((value) => value * scale + offset);
}

function notOverlapping(understood: RasterUnderstood, grids: readonly Grid[]): ImportProblem {
  const km = Math.min(...grids.flatMap((grid) => understood.boundsLonLat!.map((corner) => distanceKm(corner, fromUtm([grid.x0 + (grid.cols * grid.cellSizeM) / 2, grid.y0 - (grid.rows * grid.cellSizeM) / 2], grid.epsg)))));
  const shown = km < 9.95 ? km.toFixed(1) : String(Math.round(km));
  return new ImportProblem({
    code: 'not-overlapping',
    fact: `It does not cover ${grids.length === 1 ? 'the block' : 'any of the blocks'}: it lies ${shown} km away.`,
    remedy: 'Check that it is the right file, and that its reference system is the one it names.',
    params: { km: Number(shown) },
  });
}

function noValues(blocks: number): ImportProblem {
  return new ImportProblem({ code: 'no-values', fact: `It has no values over the ${blocks === 1 ? 'block' : 'blocks'}: every pixel there is marked as missing.`, remedy: 'Check that it is the right file and band, and that its mark for missing values is right.' });
}
