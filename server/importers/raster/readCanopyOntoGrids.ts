import { CanopyCells, type CanopyFigures } from '../../../shared/analysis/canopyCells.ts';
import type { Grid } from '../../../shared/analysis/grid.ts';
import { INDICES, indexCells, type IndexId } from '../../../shared/analysis/indices.ts';
import { rowStrips } from '../../../shared/analysis/rowStrips.ts';
import type { BandMeans } from '../../../shared/analysis/sceneFitness.ts';
import type { XY } from '../../../shared/geo/coordinates.ts';
import { naming } from '../importProblem.ts';
import type { RasterUnderstood } from '../understood.ts';
import { describeOpen, type RasterReadOptions } from './describeRaster.ts';
import { bandsOf, feed, frameOn, noDataOf, notOverlapping, noValues, scaled } from './gridPass.ts';
import { openPicture } from './pictureBlocks.ts';
import type { GridReading, RasterQuantity } from './readRasterOntoGrids.ts';
import { withRaster } from './withRaster.ts';

/** One block: its grid, how far canopy may be borrowed from next to a cell, and its rows in the grid's metres (null: by threshold). */
export interface CanopyGrid {
  readonly grid: Grid;
  readonly reachM: number;
  readonly rowsXY: readonly (readonly XY[])[] | null;
}

export interface CanopyRequest {
  readonly quantity: RasterQuantity;
  /** What a single band holds already; ignored where the index is made of bands. */
  readonly holds: IndexId | null;
  readonly grids: readonly CanopyGrid[];
  readonly noData?: number | null;
  readonly onProgress?: (done: number) => void;
}

export interface CanopyReading extends GridReading {
  readonly canopy: CanopyFigures;
}

/** Cells with a smaller share under pixels with data are missing. */
const leastCovered = 0.5;

/** Vines trained upright are about this wide seen from above (0.4 to 0.8 m, judgement). */
const rowStripM = 0.6;

/**
 * Reads a picture onto grids with the values of canopy pixels alone, tile by tile; the pixels are passed over twice where a
 * threshold must be found first. Throws ImportProblem as readRasterOntoGrids does.
 */
export function readCanopyOntoGrids(input: string | Uint8Array, options: RasterReadOptions, request: CanopyRequest): Promise<CanopyReading[]> {
  return naming(options.fileName, () =>
    withRaster(input, options, async (raster, own) => {
      const understood = describeOpen(raster, own);
      const bands = bandsOf(request.quantity, understood);
      const noData = noDataOf(bands, understood, request.noData);
      const sinks = request.grids.map(
        ({ grid, reachM, rowsXY }) =>
          new CanopyCells(grid, frameOn(grid, understood), {
            bands: bands.length,
            noData,
            reachM,
            indexOf: pixelIndex(request, bands, understood),
            isOnRow: rowsXY === null ? null : rowStrips(rowsXY, rowStripM / 2),
          }),
      );
      if (sinks.every((sink) => sink.window === null)) throw notOverlapping(understood, request.grids.map(({ grid }) => grid));
      const unmarked = noData[0] === null;
      const picture = () => openPicture(raster, { bands, alphaBand: understood.alphaBand, dropHuge: unmarked, dropDark: unmarked && request.quantity.kind === 'index' && raster.mask === null });
      const wanting = sinks.filter((sink) => sink.needsHistogram);
      const passes = wanting.length > 0 ? 2 : 1;
      if (wanting.length > 0) {
        await feed(await picture(), wanting.map((sink) => ({ window: sink.window, add: (tile) => sink.addToHistogram(tile) })), { onProgress: (done) => request.onProgress?.(done / passes) });
        for (const sink of wanting) sink.settle();
      }
      await feed(await picture(), sinks, { onProgress: (done) => request.onProgress?.((passes - 1 + done) / passes) });
      const readings = sinks.map((sink, at) => finish(sink, request.grids[at]!.grid, { understood, bands, quantity: request.quantity }));
      if (readings.every(({ cells }) => cells.every(Number.isNaN))) throw noValues(readings.length);
      return readings;
    }),
  );
}

/** Index of a pixel from stored values, in true units; near infrared over red is folded into −1…1, which keeps its order. */
function pixelIndex({ quantity, holds }: CanopyRequest, bands: readonly number[], understood: RasterUnderstood): (pixel: Float64Array) => number {
  const units = bands.map((index) => understood.bands.find((band) => band.index === index)!);
  const value = (pixel: Float64Array, at: number) => pixel[at]! * units[at]!.scale + units[at]!.offset;
  if (quantity.kind === 'index') {
    const { of } = INDICES[quantity.index === 'ratio' ? 'ndvi' : quantity.index];
    return (pixel) => of(value(pixel, 0), value(pixel, 1));
  }
  return holds === 'ratio' ? (pixel) => (value(pixel, 0) - 1) / (value(pixel, 0) + 1) : (pixel) => value(pixel, 0);
}

function finish(sink: CanopyCells, grid: Grid, { understood, bands, quantity }: { understood: RasterUnderstood; bands: readonly number[]; quantity: RasterQuantity }): CanopyReading {
  const means = sink.cells().map((cells, i) => scaled(cells, understood.bands.find((band) => band.index === bands[i])!));
  const bandMeans: BandMeans | null = quantity.kind === 'band' ? null : Object.fromEntries(INDICES[quantity.index].bands.map((name, i) => [name, means[i]!]));
  const values = quantity.kind === 'band' ? means[0]! : indexCells(quantity.index, bandMeans!);
  const covered = sink.covered();
  const cells = values.map((value, cell) => (covered[cell]! + 1e-6 < leastCovered ? NaN : value));
  return { gridKey: grid.key, cells, covered, reaches: sink.window !== null, bandMeans, canopy: sink.figures() };
}
