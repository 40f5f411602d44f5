import proj4 from 'proj4';
import { describe, expect, it } from 'vitest';
import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { resampler } from '../../shared/analysis/resample.ts';
import { pixelsPerCell, pixelWindow, type RasterFrame } from '../../shared/analysis/resampleFrame.ts';
import { CellSums } from '../../shared/analysis/resampleSums.ts';
import type { PixelSink, PixelTile } from '../../shared/analysis/resampleTile.ts';
import { fromUtm, utmDefinition } from '../../shared/geo/utm.ts';
import { CORNER, rectangleGrid } from './pictures.ts';

const { x: X, y: Y } = CORNER;

interface Raster {
  readonly values: ArrayLike<number>;
  readonly bands?: number;
  readonly frame: RasterFrame;
}

/** Feeds a raster with interleaved bands in padded tiles. */
function feed(sink: PixelSink, { values, bands = 1, frame }: Raster, tileSize = 1000): void {
  for (let firstRow = 0; firstRow < frame.height; firstRow += tileSize) {
    for (let firstCol = 0; firstCol < frame.width; firstCol += tileSize) sink.add(tileOf({ values, bands, frame }, { firstCol, firstRow, tileSize }));
  }
}

function tileOf({ values, bands = 1, frame }: Raster, { firstCol, firstRow, tileSize }: { firstCol: number; firstRow: number; tileSize: number }): PixelTile {
  const cols = Math.min(tileSize, frame.width - firstCol);
  const rows = Math.min(tileSize, frame.height - firstRow);
  const stored = new Float32Array(tileSize * Math.max(rows, 1) * bands).fill(777);
  for (let row = 0; row < rows; row++) {
    for (let col = 0; col < cols; col++) for (let band = 0; band < bands; band++) stored[(row * tileSize + col) * bands + band] = values[((firstRow + row) * frame.width + firstCol + col) * bands + band]!;
  }
  return { firstCol, firstRow, cols, rows, storedCols: tileSize, bands: Array.from({ length: bands }, (_, offset) => ({ values: stored, offset, stride: bands })) };
}

const northUp = (width: number, height: number, [x, y]: readonly [number, number], pixelM: number): RasterFrame => ({ width, height, transform: [x, pixelM, 0, y, 0, -pixelM] });
const rounded = (cells: Float32Array) => Array.from(cells, (value) => Math.round(value * 1e4) / 1e4);

// Pixels of 1.5 m, off the lattice of 2 m cells, with two missing. Expected values: gdalwarp of GDAL 3.6.2, -r average and -r near.
const small = {
  values: [10, 20, 30, 40, 50, 12, 22, 32, 42, 52, -9, 25, 35, 45, 55, 18, 28, 38, -9, 58, 11, 21, 31, 41, 51],
  frame: northUp(5, 5, [X + 0.5, Y - 0.5], 1.5),
};

describe('averages of pixels over cells', () => {
  it('weigh coarse pixels by the area they share with the cell', () => {
    const sums = new CellSums(rectangleGrid(4, 4, 2), small.frame, { bands: 1, noData: [-9] });
    feed(sums, small);
    expect(rounded(sums.cells()[0]!)).toEqual([10, 22.5, 35, 47.5, 12, 25.25, 37.75, 50.25, 18, 29, 39.3333, 54.8571, 12.75, 25.25, 36.2857, 50.4]);
    // Covered parts of the first column, by hand: the raster begins half a metre in; its third pixel is missing.
    expect(Array.from(sums.covered().filter((_, cell) => cell % 4 === 0), (part) => Math.round(part * 1e6) / 1e6)).toEqual([0.5625, 0.5625, 0.375, 0.75]);
  });

  it('take fine pixels by their centre, as a plain block mean', () => {
    const random = seededRandom(3);
    const values = Array.from({ length: 32 * 24 }, () => Math.floor(random() * 65536));
    const sums = new CellSums(rectangleGrid(4, 3, 2), northUp(32, 24, [X, Y], 0.25), { bands: 1 });
    feed(sums, { values, frame: northUp(32, 24, [X, Y], 0.25) }, 5);
    const expected = Array.from({ length: 12 }, (_, cell) => {
      let sum = 0;
      for (let pixel = 0; pixel < 64; pixel++) sum += values[(Math.floor(cell / 4) * 8 + Math.floor(pixel / 8)) * 32 + (cell % 4) * 8 + (pixel % 8)]!;
      return Math.fround(sum / 64);
    });
    expect(Array.from(sums.cells()[0]!)).toEqual(expected);
    expect(Array.from(sums.covered())).toEqual(new Array(12).fill(1));
  });

  it('drop a pixel from all bands when one has no data, NaN or infinity', () => {
    const frame = northUp(4, 4, [X, Y], 0.25);
    const values = Array.from({ length: 16 }, () => [4, 8]);
    values[0] = [255, 8];
    values[1] = [4, NaN];
    values[2] = [Infinity, 8];
    values[3] = [100, 0];
    for (const bands of [2, 3]) {
      const sums = new CellSums(rectangleGrid(1, 1, 1), frame, { bands, noData: [255, 0, null] });
      feed(sums, { values: values.flatMap((pixel) => (bands === 2 ? pixel : [...pixel, 1])), bands, frame });
      expect(sums.cells().map((cells) => cells[0])).toEqual([4, 8, 1].slice(0, bands));
      expect(sums.covered()[0]).toBeCloseTo(12 / 16, 6);
    }
  });

  it('know a no-data value that float32 cannot hold exactly', () => {
    const frame = northUp(1, 1, [X, Y], 1);
    const sums = new CellSums(rectangleGrid(1, 1, 1), frame, { bands: 1, noData: [-3.4028230607e38] });
    sums.add({ firstCol: 0, firstRow: 0, cols: 1, rows: 1, storedCols: 1, bands: [{ values: Float32Array.from([-3.4028230607e38]), offset: 0, stride: 1 }] });
    expect(sums.cells()[0]![0]).toBeNaN();
  });

  it('do not depend on the tiling', () => {
    const random = seededRandom(5);
    for (const pixelM of [0.3, 1.3, 7]) {
      const frame = northUp(60, 50, [X - 3.2, Y + 2.1], pixelM);
      const values = Array.from({ length: 60 * 50 * 2 }, () => Math.floor(random() * 1000));
      const [whole, tiled] = [1000, 7].map((tileSize) => {
        const sums = new CellSums(rectangleGrid(6, 5, 2), frame, { bands: 2 });
        feed(sums, { values, bands: 2, frame }, tileSize);
        return sums.cells().map(rounded);
      });
      expect(tiled).toEqual(whole);
    }
  });

  it('of a turned raster keep every pixel whole: what the cells hold is what the pixels hold', () => {
    const [cos, sin] = [Math.cos(0.4), Math.sin(0.4)];
    const grid = rectangleGrid(40, 40, 2);
    for (const pixelM of [0.5, 1.3, 8]) {
      const frame: RasterFrame = { width: 5, height: 4, transform: [X + 25, pixelM * cos, pixelM * sin, Y - 40, pixelM * sin, -pixelM * cos] };
      const values = Array.from({ length: 20 }, (_, pixel) => pixel + 1);
      const sums = new CellSums(grid, frame, { bands: 1, weighting: 'area' });
      feed(sums, { values, frame }, 3);
      const covered = sums.covered();
      const total = sums.cells()[0]!.reduce((sum, value, cell) => sum + (Number.isNaN(value) ? 0 : value * covered[cell]! * 4), 0);
      expect(total / (210 * pixelM ** 2)).toBeCloseTo(1, 6);
      expect(covered.reduce((sum, part) => sum + part * 4, 0) / (20 * pixelM ** 2)).toBeCloseTo(1, 6);
    }
  });

  it('of a raster in degrees follow each pixel to where it lies', () => {
    const grid = rectangleGrid(40, 30, 2);
    const toGrid = proj4('EPSG:4326', utmDefinition(CORNER.epsg));
    const [lon, lat] = fromUtm([X - 10, Y + 10], CORNER.epsg);
    const random = seededRandom(8);
    const frame: RasterFrame = { width: 300, height: 220, transform: [lon, 4.3e-6, 0, lat, 0, -3.4e-6], toGrid };
    const values = Array.from({ length: 300 * 220 }, () => Math.floor(random() * 1000));
    const sums = new CellSums(grid, frame, { bands: 1 });
    feed(sums, { values, frame }, 64);
    // The long way: every pixel centre projected on its own.
    const sum = new Float64Array(1200);
    const count = new Float64Array(1200);
    values.forEach((value, pixel) => {
      const [x, y] = toGrid.forward([lon + ((pixel % 300) + 0.5) * 4.3e-6, lat - (Math.floor(pixel / 300) + 0.5) * 3.4e-6]);
      const [col, row] = [Math.floor((x - X) / 2), Math.floor((Y - y) / 2)];
      if (col < 0 || col >= 40 || row < 0 || row >= 30) return;
      sum[row * 40 + col]! += value;
      count[row * 40 + col]! += 1;
    });
    const differing = sums.cells()[0]!.filter((mean, cell) => Math.abs(mean - sum[cell]! / count[cell]!) > 1e-3).length;
    // A pixel centre within a hundredth of a cell of a cell's edge may fall to the other side.
    expect(differing).toBeLessThan(60);
    expect(sums.cells()[0]!.some(Number.isNaN)).toBe(false);
  });

  it.each([
    ['north up', 0, 0.25, undefined],
    ['turned', 0.4, 0.25, undefined],
    ['by shared area', 0, 1.5, undefined],
    ['in degrees', 0, 0.25, 'EPSG:4326'],
  ] as const)('are the same without the tiles far from the block: %s', (_, turn, pixelM, system) => {
    // A ring of ground: tiles lie outside, within its hole and across its sides.
    const side = (from: number, to: number) => [[X + from, Y - from], [X + to, Y - from], [X + to, Y - to], [X + from, Y - to], [X + from, Y - from]] as [number, number][];
    const grid = gridOfOutline([[side(6.7, 93.1), side(21.3, 80.9).reverse()]], CORNER.epsg, 2);
    const [across, down] = [pixelM * Math.cos(turn), pixelM * Math.sin(turn)];
    const [lon, lat] = fromUtm([X - 10, Y + 10], CORNER.epsg);
    const size = Math.round(130 / pixelM);
    const tileSize = Math.round(8 / pixelM);
    const frame: RasterFrame =
      system === undefined
        ? { width: size, height: size, transform: [X - 10 - 50 * Math.sin(turn), across, down, Y + 10, down, -across] }
        : { width: size, height: size, transform: [lon, 2.7e-6, 0, lat, 0, -2.25e-6], toGrid: proj4(system, utmDefinition(CORNER.epsg)) };
    const random = seededRandom(21);
    const raster = { values: Array.from({ length: size * size }, () => Math.floor(random() * 65536)), frame };
    const all = new CellSums(grid, frame, { bands: 1 });
    feed(all, raster, tileSize);
    const needed = resampler(grid, frame, { method: 'mean', bands: 1 });
    let left = 0;
    for (let firstRow = 0; firstRow < size; firstRow += tileSize) {
      for (let firstCol = 0; firstCol < size; firstCol += tileSize) {
        if (needed.needs!({ firstCol, firstRow, cols: tileSize, rows: tileSize })) needed.add(tileOf(raster, { firstCol, firstRow, tileSize }));
        else left++;
      }
    }
    const onGround = (cells: Float32Array) => cells.filter((__, cell) => grid.share[cell]! > 0);
    expect(onGround(needed.cells()[0]!)).toEqual(onGround(all.cells()[0]!));
    expect(left).toBeGreaterThan(20);
  });

  it('read only the pixels near the grid, and none when the raster lies elsewhere', () => {
    const grid = rectangleGrid(10, 10, 2);
    expect(pixelWindow(grid, northUp(1000, 1000, [X - 100, Y + 100], 0.5))).toEqual({ firstCol: 198, firstRow: 198, cols: 44, rows: 44 });
    const elsewhere = northUp(100, 100, [X + 500, Y], 1);
    const sums = new CellSums(grid, elsewhere, { bands: 1 });
    expect(sums.window).toBeNull();
    feed(sums, { values: new Array(10_000).fill(1), frame: elsewhere });
    expect(sums.cells()[0]!.every(Number.isNaN)).toBe(true);
    expect(pixelsPerCell(grid, northUp(10, 10, [X, Y], 0.25))).toBeCloseTo(8, 9);
  });
});

describe('classes', () => {
  it('come from the pixel at the centre of the cell', () => {
    const sink = resampler(rectangleGrid(4, 4, 2), small.frame, { method: 'nearest', bands: 1, noData: [-9] });
    feed(sink, small, 2);
    expect(Array.from(sink.cells()[0]!)).toEqual([10, 20, 40, 50, 12, 22, 42, 52, 18, 28, NaN, 58, 11, 21, 41, 51]);
  });
});

describe('elevation', () => {
  const surface = (grid: Grid, raster: Raster, noData: number | null = null) => {
    const sink = resampler(grid, raster.frame, { method: 'surface', bands: 1, noData: [noData] });
    feed(sink, raster, 3);
    return sink.cells()[0]!;
  };

  // Expected values: gdalwarp -r bilinear of GDAL 3.6.2, the rows of cells without a missing pixel near.
  it('from coarse pixels is a surface through the pixel centres', () => {
    const cells = surface(rectangleGrid(8, 8, 1), small, -9);
    const expected = [10, 11.66667, 18.33333, 25, 31.66667, 38.33333, 45, 50, 10.33333, 12, 18.66667, 25.33333, 32, 38.66667, 45.33333, 50.33333];
    expected.forEach((value, cell) => expect(cells[cell]).toBeCloseTo(value, 4));
    expect(Array.from(cells.slice(56, 61), (value) => Math.round(value * 1e4) / 1e4)).toEqual([11, 12.6667, 19.3333, 26, 32.6667]);
  });

  it('of a plane keeps its height at every cell, whatever the pixel size', () => {
    const grid = gridOfOutline([[[[X, Y], [X, Y - 60], [X + 80, Y - 60], [X + 80, Y], [X, Y]]]], CORNER.epsg, 2);
    for (const pixelM of [0.5, 3, 10, 30]) {
      const size = Math.ceil(140 / pixelM);
      const frame = northUp(size, size, [X - 31.3, Y + 33.1], pixelM);
      const values = Array.from({ length: size * size }, (_, pixel) => 100 + 0.1 * ((pixel % size) + 0.5) * pixelM - 0.07 * (Math.floor(pixel / size) + 0.5) * pixelM);
      surface(grid, { values, frame }).forEach((value, cell) => {
        const [x, y] = [((cell % 40) + 0.5) * 2 + 31.3, (Math.floor(cell / 40) + 0.5) * 2 + 33.1];
        expect(Math.abs(value - (100 + 0.1 * x - 0.07 * y))).toBeLessThan(1e-4);
      });
    }
  });
});
