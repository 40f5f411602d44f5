import { execFileSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import type { MultiPolygon, Polygon } from 'geojson';
import { defineGrid, gridOfOutline, type Grid } from '../../../shared/analysis/grid.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { ImportProblem } from '../../../server/importers/importProblem.ts';
import { readRasterOntoGrids, type RasterQuantity } from '../../../server/importers/raster/readRasterOntoGrids.ts';
import { readVectors } from '../../../server/importers/vector/readVectors.ts';
import { writeTiff } from './writeTiff.ts';

const fixture = (name: string): string => join(import.meta.dirname, '../../fixtures/rasters', name);
const band = (index: number, method: 'mean' | 'nearest' | 'surface' = 'mean'): RasterQuantity => ({ kind: 'band', band: index, method });
const ndvi: RasterQuantity = { kind: 'index', index: 'ndvi', bands: { red: 1, nir: 2 } };

/** A rectangle of ground in UTM zone 31 north. */
function rectangle(x: number, y: number, widthM: number, heightM: number, cellSizeM: number): Grid {
  return gridOfOutline([[[[x, y], [x + widthM, y], [x + widthM, y + heightM], [x, y + heightM], [x, y]]]], 32631, cellSizeM);
}

async function outlineOfTracts(): Promise<MultiPolygonLonLat> {
  const { layers } = await readVectors(fixture('tracts.shp.zip'), { fileName: 'tracts.shp.zip' });
  return layers[0]!.featuresLonLat.features.flatMap(({ geometry }) => ((geometry as Polygon | MultiPolygon).type === 'Polygon' ? [(geometry as Polygon).coordinates] : (geometry as MultiPolygon).coordinates)) as unknown as MultiPolygonLonLat;
}

describe('a raster made by hand', () => {
  // 2 m pixels from (500000, 4950000) downwards; value = column + 10 · row, missing in one pixel.
  const tiff = writeTiff({ width: 8, height: 6, value: (col, row) => (col === 0 && row === 0 ? 65000 : col + 10 * row), noData: '65000' });

  it('averages the pixels of each cell and leaves the missing one out', async () => {
    const [reading] = await readRasterOntoGrids(tiff, { fileName: 'a.tif' }, { quantity: band(1), grids: [rectangle(500000, 4949992, 16, 8, 8)] });
    // Cell 1: rows 0–3 and columns 0–3 without (0,0): (16·16.5 − 0) / 15; cell 2: columns 4–7: 5.5 + 15.
    expect([...reading!.cells]).toEqual([Math.fround(264 / 15), 20.5]);
    expect([...reading!.covered]).toEqual([15 / 16, 1]);
  });

  it('serves two blocks in one pass and says which the picture reaches', async () => {
    const [first, second] = await readRasterOntoGrids(tiff, { fileName: 'a.tif' }, { quantity: band(1), grids: [rectangle(500008, 4949992, 8, 8, 8), rectangle(501000, 4949992, 8, 8, 8)] });
    expect([first!.reaches, ...first!.cells]).toEqual([true, 20.5]);
    expect(second!.reaches).toBe(false);
    expect(second!.cells.every(Number.isNaN)).toBe(true);
  });

  it('drops cells that the picture covers by less than half', async () => {
    // The picture begins 8 m east of the first cell of 12 m and covers a third of it.
    const request = { quantity: band(1), grids: [rectangle(499992, 4949988, 24, 12, 12)] };
    const [half] = await readRasterOntoGrids(tiff, { fileName: 'a.tif' }, request);
    expect([...half!.cells].map(Number.isNaN)).toEqual([true, false]);
    const [quarter] = await readRasterOntoGrids(tiff, { fileName: 'a.tif' }, { ...request, minCoverage: 0.25 });
    expect([...quarter!.cells].map(Number.isNaN)).toEqual([false, false]);
  });

  it('refuses when no block is reached, with the distance', async () => {
    // 10 km west of the picture: from the nearer side of the picture to the middle of the block.
    const refused = readRasterOntoGrids(tiff, { fileName: 'far.tif' }, { quantity: band(1), grids: [rectangle(490000, 4949992, 8, 8, 8)] });
    await expect(refused).rejects.toThrow(/^far\.tif: It does not cover the block: it lies 10 km away\./);
    await expect(refused).rejects.toMatchObject({ code: 'not-overlapping', params: { km: 10 } });
  });

  it('refuses when every pixel over the block is missing', async () => {
    const empty = writeTiff({ width: 8, height: 6, value: () => 7, noData: '7' });
    await expect(readRasterOntoGrids(empty, { fileName: 'e.tif' }, { quantity: band(1), grids: [rectangle(500000, 4949992, 16, 8, 8)] })).rejects.toMatchObject({ code: 'no-values' });
  });

  it('does not guess a reference system', async () => {
    const bare = writeTiff({ width: 8, height: 6, geo: { keys: [] } });
    const request = { quantity: band(1), grids: [rectangle(500000, 4949992, 16, 8, 8)] };
    await expect(readRasterOntoGrids(bare, { fileName: 'b.tif' }, request)).rejects.toMatchObject({ code: 'no-reference' });
    const [reading] = await readRasterOntoGrids(bare, { fileName: 'b.tif', answers: { epsg: 32631 } }, request);
    expect(reading!.cells[1]).toBe(20.5);
  });

  it('names the bands there are when another is asked for', async () => {
    await expect(readRasterOntoGrids(tiff, { fileName: 'b.tif' }, { quantity: band(4), grids: [rectangle(500000, 4949992, 16, 8, 8)] })).rejects.toThrow(/no band 4.*Choose from its bands: 1/);
  });

  it('gives the same cells south-up, turned, as PixelIsPoint and from a world file', async () => {
    const grid = rectangle(500000, 4949988, 16, 12, 4);
    const cells = async (bytes: Uint8Array, worldFileText?: string) => [...(await readRasterOntoGrids(bytes, { fileName: 'x.tif', worldFileText: worldFileText ?? null, answers: worldFileText === undefined ? {} : { epsg: 32631 } }, { quantity: band(1), grids: [grid] }))[0]!.cells];
    const size = { width: 8, height: 6 };
    const plain = await cells(writeTiff(size));
    expect(plain.slice(0, 4)).toEqual([5.5, 7.5, 9.5, 11.5]);
    expect(await cells(writeTiff({ ...size, value: (col, row) => col + 10 * (5 - row), geo: { transformation: [2, 0, 0, 500000, 0, 2, 0, 4949988, 0, 0, 0, 0, 0, 0, 0, 1] } }))).toEqual(plain);
    expect(await cells(writeTiff({ width: 6, height: 8, value: (col, row) => row + 10 * col, geo: { transformation: [0, 2, 0, 500000, -2, 0, 0, 4950000, 0, 0, 0, 0, 0, 0, 0, 1] } }))).toEqual(plain);
    expect(await cells(writeTiff({ ...size, geo: { isPoint: true, x: 500001, y: 4949999 } }))).toEqual(plain);
    expect(await cells(writeTiff({ ...size, geo: null }), '2\n0\n0\n-2\n500001\n4949999\n')).toEqual(plain);
    expect(await cells(writeTiff({ ...size, geo: { tiePoints: [0, 0, 0, 500000, 4950000, 0, 8, 0, 0, 500016, 4950000, 0, 8, 6, 0, 500016, 4949988, 0, 0, 6, 0, 500000, 4949988, 0] } }))).toEqual(plain);
  });

  it('applies scale and offset after averaging', async () => {
    const xml = '<GDALMetadata><Item name="OFFSET" sample="0" role="offset">-1</Item><Item name="SCALE" sample="0" role="scale">0.5</Item></GDALMetadata>';
    const [reading] = await readRasterOntoGrids(writeTiff({ width: 8, height: 6, tags: { 42112: xml } }), { fileName: 's.tif' }, { quantity: band(1), grids: [rectangle(500008, 4949992, 8, 8, 8)] });
    expect(reading!.cells[0]).toBe(20.5 * 0.5 - 1);
  });

  it('takes pixels without light out of an index when the file marks nothing as missing', async () => {
    const dark = writeTiff({ width: 8, height: 6, bands: 2, value: (col, _, index) => (col < 2 ? 0 : index === 0 ? 100 : 300) });
    const [reading] = await readRasterOntoGrids(dark, { fileName: 'd.tif' }, { quantity: ndvi, grids: [rectangle(500000, 4949992, 8, 8, 8)] });
    expect([reading!.cells[0], reading!.covered[0]]).toEqual([0.5, 0.5]);
  });
});

describe('Landsat-7 and elevation near Olinda against GDAL and numpy', () => {
  let grid: Grid;
  beforeAll(async () => {
    grid = defineGrid(await outlineOfTracts(), 2);
  });

  const blockMean = (cells: Float32Array): number => {
    let sum = 0;
    let weight = 0;
    cells.forEach((value, cell) => {
      if (Number.isNaN(value)) return;
      sum += value * grid.share[cell]!;
      weight += grid.share[cell]!;
    });
    return sum / weight;
  };

  it('the outline of the five tracts has the area that OGR gives', () => {
    expect(Math.abs(grid.share.reduce((sum, share) => sum + share, 0) * 4 - 4138160.148)).toBeLessThan(1);
  });

  it('the index averaged over the block agrees with the area-weighted mean of the index picture', async () => {
    const [reading] = await readRasterOntoGrids(fixture('l7_red_nir.tif'), { fileName: 'l7.tif' }, { quantity: ndvi, grids: [grid] });
    // 0.251877: exact-area mean over the block computed outside; cells of 2 m under pixels of 28.5 m repeat the pixels.
    // Where a cell lies on the edge of two pixels, bands averaged before the index differ a little from the index averaged.
    expect(Math.abs(blockMean(reading!.cells) - 0.25187685513719)).toBeLessThan(1e-4);
  });

  it('elevation from coarse pixels stays within what the picture has', async () => {
    const [reading] = await readRasterOntoGrids(fixture('dem.tif'), { fileName: 'dem.tif' }, { quantity: band(1, 'surface'), grids: [grid] });
    // 43.5018 m is the mean of the 5,089 pixel centres in the block.
    expect(Math.abs(blockMean(reading!.cells) - 43.50178450604838)).toBeLessThan(0.05);
  });
});

const gdal = existsSync('/usr/bin/gdalwarp');

describe.skipIf(!gdal)('cells against 25 × 25 samples a cell by gdalwarp (skipped without gdal-bin)', () => {
  // Largest allowed mean difference of digital numbers. A pixel of misplacement gives 4.7 with cells of two pixels, 1.6 with six.
  it.each([
    ['coarse pixels by shared area, same system', 57, 'EPSG:31985', 0.25],
    ['coarse pixels by shared area, another projection', 60, 'EPSG:3857', 0.25],
    ['coarse pixels by shared area, degrees', 60, 'EPSG:4326', 0.25],
    ['fine pixels by their centre, another projection', 180, 'EPSG:3857', 0.8],
    ['fine pixels by their centre, degrees', 180, 'EPSG:4326', 0.8],
  ])('%s', async (_, cellSizeM, system, allowed) => {
    const folder = mkdtempSync(join(tmpdir(), 'cells-'));
    try {
      const env = { ...process.env, GDAL_PAM_ENABLED: 'NO' };
      execFileSync('/usr/bin/gdalwarp', ['-q', '-t_srs', system, '-r', 'near', '-ot', 'Float32', '-dstnodata', '-9999', fixture('l7_red_nir.tif'), join(folder, 'in.tif')], { env });
      const grid = gridOfOutline([[[[292200, 9115800], [294000, 9115800], [294000, 9117600], [292200, 9117600], [292200, 9115800]]]], 32725, cellSizeM);
      const edges = [grid.x0, grid.y0 - grid.rows * cellSizeM, grid.x0 + grid.cols * cellSizeM, grid.y0].map(String);
      execFileSync('/usr/bin/gdalwarp', ['-q', '-of', 'ENVI', '-co', 'INTERLEAVE=BSQ', '-t_srs', 'EPSG:32725', '-te', ...edges, '-ts', String(grid.cols * 25), String(grid.rows * 25), '-r', 'near', '-et', '0', join(folder, 'in.tif'), join(folder, 'out.bin')], { env });
      const raw = readFileSync(join(folder, 'out.bin'));
      const samples = new Float32Array(raw.buffer.slice(raw.byteOffset, raw.byteOffset + grid.cols * grid.rows * 625 * 4));
      const wanted = new Float64Array(grid.cols * grid.rows);
      samples.forEach((value, i) => (wanted[Math.floor(i / (grid.cols * 625)) * grid.cols + Math.floor((i % (grid.cols * 25)) / 25)]! += value / 625));
      const [reading] = await readRasterOntoGrids(join(folder, 'in.tif'), { fileName: 'in.tif' }, { quantity: band(1), grids: [grid] });
      const off = Array.from(reading!.cells, (value, cell) => value - wanted[cell]!);
      expect(off.reduce((sum, value) => sum + Math.abs(value), 0) / off.length).toBeLessThan(allowed);
      expect(Math.abs(off.reduce((sum, value) => sum + value, 0) / off.length)).toBeLessThan(0.1);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});

it('every refusal is an ImportProblem with the name of the file', async () => {
  const error: unknown = await readRasterOntoGrids(new Uint8Array(300), { fileName: 'zeros.tif' }, { quantity: band(1), grids: [] }).catch((caught: unknown) => caught);
  expect(error).toBeInstanceOf(ImportProblem);
  expect((error as ImportProblem).message).toMatch(/^zeros\.tif: /);
});
