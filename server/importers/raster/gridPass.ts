import type { Grid } from '../../../shared/analysis/grid.ts';
import { INDICES } from '../../../shared/analysis/indices.ts';
import type { PixelWindow, RasterFrame } from '../../../shared/analysis/resampleFrame.ts';
import type { PixelTile } from '../../../shared/analysis/resampleTile.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { distanceKm } from '../reference/distance.ts';
import { reprojectionTo } from '../reference/referenceSystem.ts';
import type { RasterUnderstood } from '../understood.ts';
import type { PictureReader } from './pictureBlocks.ts';
import { at } from './pixelTransform.ts';
import type { RasterQuantity } from './readRasterOntoGrids.ts';

/** What every reading of a picture onto grids needs: its bands, its place on a grid, one pass over its pixels, its refusals. */

/** Band numbers to read, in the order of the index's formula. */
export function bandsOf(quantity: RasterQuantity, understood: RasterUnderstood): number[] {
  const wanted = quantity.kind === 'band' ? [['value', quantity.band] as const] : INDICES[quantity.index].bands.map((name) => [name, quantity.bands[name]] as const);
  return wanted.map(([name, band]) => {
    if (band !== undefined && understood.bands.some((each) => each.index === band)) return band;
    const listed = understood.bands.map((each) => each.index).join(', ');
    throw new ImportProblem({ code: 'bad-request', fact: band === undefined ? `It is not said which band is ${name}.` : `It has no band ${band} of values.`, remedy: `Choose from its bands: ${listed}.`, params: { band: band ?? name, listed } });
  });
}

/** Where the picture's pixels lie on a grid. Throws while its reference system is open. */
export function frameOn(grid: Grid, understood: RasterUnderstood): RasterFrame {
  const question = understood.questions.find(({ code }) => code === 'reference-system');
  if (understood.reference === null || understood.transform === null) {
    throw new ImportProblem({ code: 'no-reference', fact: question?.text ?? 'Its reference system is not known.', remedy: 'Answer the question about its reference system first.' });
  }
  const middle = at(understood.transform, understood.width / 2, understood.height / 2);
  const toGrid = reprojectionTo(understood.reference, grid.epsg, middle);
  return { width: understood.width, height: understood.height, transform: understood.transform, ...(toGrid === undefined ? {} : { toGrid }) };
}

/** Number that means "no data" in each band asked for: the answer, else the file's own. */
export function noDataOf(bands: readonly number[], understood: RasterUnderstood, answer: number | null | undefined): (number | null)[] {
  return bands.map((index) => (answer === undefined ? understood.bands.find((band) => band.index === index)!.noData : answer));
}

/** Rows of pixels that a thread takes at once when several read one picture. */
const SHARED_ROWS = 64;

/** What takes the pixels of its window. */
export interface BlockTaker {
  readonly window: PixelWindow | null;
  /** Does a rectangle within its window matter? Absent: it does. */
  needs?(place: PixelWindow): boolean;
  add(tile: PixelTile): void;
}

export interface FeedOptions {
  readonly onProgress?: ((done: number) => void) | undefined;
  readonly signal?: AbortSignal | undefined;
  /** Bands of rows taken so far, in shared memory, where several threads read one picture. */
  readonly taken?: Int32Array | undefined;
}

/** Decodes every block of pixels that some grid needs once, and gives it to each of these grids. */
export async function feed(reader: PictureReader, sinks: readonly BlockTaker[], { onProgress, signal, taken }: FeedOptions): Promise<void> {
  const { blockWidth, blockHeight } = reader.layout;
  const needed = neededBlocks(reader, sinks);
  const pixels = needed.reduce((sum, row) => sum + row.length, 0) * blockWidth * blockHeight;
  if (pixels > limits.rasterPixels) {
    throw new ImportProblem({
      code: 'too-large',
      fact: `${Math.round(pixels / 1e6)} million pixels lie over the blocks; ${limits.rasterPixels / 1e6} million is the most.`,
      remedy: 'Export it with larger pixels; 0.1 m is fine enough for vine rows.',
      params: { millionPixels: Math.round(pixels / 1e6) },
    });
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
  readonly takers: readonly BlockTaker[];
}

/** Blocks over some grid, row by row; rows without any are left out. */
function neededBlocks({ layout: { blockWidth, blockHeight, blocksAcross, blocksDown } }: PictureReader, sinks: readonly BlockTaker[]): NeededBlock[][] {
  const needed: NeededBlock[][] = [];
  for (let blockRow = 0; blockRow < blocksDown; blockRow++) {
    const inRow = sinks.filter(({ window }) => window !== null && window.firstRow < (blockRow + 1) * blockHeight && window.firstRow + window.rows > blockRow * blockHeight);
    const row: NeededBlock[] = [];
    for (let blockCol = 0; inRow.length > 0 && blockCol < blocksAcross; blockCol++) {
      const place = { firstCol: blockCol * blockWidth, firstRow: blockRow * blockHeight, cols: blockWidth, rows: blockHeight };
      const takers = inRow.filter((taker) => taker.window!.firstCol < place.firstCol + blockWidth && taker.window!.firstCol + taker.window!.cols > place.firstCol && (taker.needs?.(place) ?? true));
      if (takers.length > 0) row.push({ blockCol, blockRow, takers });
    }
    if (row.length > 0) needed.push(row);
  }
  return needed;
}

export function scaled(cells: Float32Array, { scale, offset }: { scale: number; offset: number }): Float32Array {
  return scale === 1 && offset === 0 ? cells : cells.map((value) => value * scale + offset);
}

export function notOverlapping(understood: RasterUnderstood, grids: readonly Grid[]): ImportProblem {
  const km = Math.min(...grids.flatMap((grid) => understood.boundsLonLat!.map((corner) => distanceKm(corner, fromUtm([grid.x0 + (grid.cols * grid.cellSizeM) / 2, grid.y0 - (grid.rows * grid.cellSizeM) / 2], grid.epsg)))));
  const shown = km < 9.95 ? km.toFixed(1) : String(Math.round(km));
  return new ImportProblem({
    code: 'not-overlapping',
    fact: `It does not cover ${grids.length === 1 ? 'the block' : 'any of the blocks'}: it lies ${shown} km away.`,
    remedy: 'Check that it is the right file, and that its reference system is the one it names.',
    params: { why: 'far', km: Number(shown) },
  });
}

export function noValues(blocks: number): ImportProblem {
  return new ImportProblem({
    code: 'no-values',
    fact: `It has no values over the ${blocks === 1 ? 'block' : 'blocks'}: every pixel there is marked as missing.`,
    remedy: 'Check that it is the right file and band, and that its mark for missing values is right.',
    params: { why: 'missing-here' },
  });
}
