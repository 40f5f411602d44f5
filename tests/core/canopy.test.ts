import { describe, expect, it } from 'vitest';
import { readCanopyOntoGrids } from '../../server/importers/raster/readCanopyOntoGrids.ts';
import { readRasterOntoGrids } from '../../server/importers/raster/readRasterOntoGrids.ts';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { otsuThreshold } from '../../shared/analysis/otsu.ts';
import { rowStrips } from '../../shared/analysis/rowStrips.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import { writeTiff } from './importers/writeTiff.ts';

describe('threshold after Otsu', () => {
  it('parts the worked example of six grey levels between 2 and 3', () => {
    // Histogram 8 7 2 6 9 4 of a 6 by 6 picture: variance within the classes is least, 0.4909, when levels 0–2 are apart from 3–5.
    const counts = [8, 7, 2, 6, 9, 4];
    const found = otsuThreshold(counts)!;
    expect(found.bin).toBe(2);
    const mean = counts.reduce((sum, n, level) => sum + n * level, 0) / 36;
    const variance = counts.reduce((sum, n, level) => sum + n * (level - mean) ** 2, 0) / 36;
    expect((1 - found.separability) * variance).toBeCloseTo(0.4909, 4);
  });

  it('agrees with every threshold tried one by one', () => {
    let state = 9;
    const counts = Array.from({ length: 64 }, () => (state = (state * 48_271) % 2_147_483_647) % 100);
    const between = (bin: number) => {
      const number = (from: number, to: number) => counts.slice(from, to).reduce((sum, count) => sum + count, 0);
      const mean = (from: number, to: number) => counts.slice(from, to).reduce((sum, count, at) => sum + count * (from + at), 0) / number(from, to);
      return number(0, bin + 1) * number(bin + 1, 64) * (mean(0, bin + 1) - mean(bin + 1, 64)) ** 2;
    };
    const best = Array.from({ length: 63 }, (_, bin) => bin).reduce((most, bin) => (between(bin) > between(most) ? bin : most));
    expect(otsuThreshold(counts)!.bin).toBe(best);
  });

  it('lies in the middle of a gap, and is none for one value or nothing', () => {
    expect(otsuThreshold([5, 0, 0, 0, 5])).toEqual({ bin: 1, separability: 1 });
    expect(otsuThreshold([0, 7, 0])).toBeNull();
    expect(otsuThreshold([0, 0])).toBeNull();
  });
});

// Rows run north–south every 2.5 m at x = 1.25, 3.75 …; canopy 0.5 m wide; vigour rises to the east, alleys hold 0.2.
const [x0, y0] = [500_000, 4_950_000];
const [width, height] = [60, 40];
const grid = gridOfOutline([[[[x0, y0], [x0 + width, y0], [x0 + width, y0 + height], [x0, y0 + height], [x0, y0]]]], 32631, 2);
const pixel = 0.125;
const fromRow = (x: number) => Math.abs(((x % 2.5) + 2.5) % 2.5 - 1.25);
const vigour = (x: number) => 0.5 + x / 300;
function picture(alley: (x: number, y: number) => number, shiftM = 0): Uint8Array {
  const geo = { epsg: 32631, x: x0, y: y0 + height, pixel };
  return writeTiff({ width: width / pixel, height: height / pixel, type: 'f32', tile: 64, geo, value: (col, row) => {
    const [x, y] = [(col + 0.5) * pixel, height - (row + 0.5) * pixel];
    return fromRow(x - shiftM) < 0.25 ? vigour(x) : alley(x, y);
  } });
}
const rows = Array.from({ length: 24 }, (_, row): XY[] => [[x0 + 1.25 + 2.5 * row, y0], [x0 + 1.25 + 2.5 * row, y0 + height]]);
const one = { kind: 'band', band: 1, method: 'mean' } as const;
const byIndex = { quantity: one, holds: 'ndvi', grids: [{ grid, reachM: 2.5, rowsXY: null }] } as const;
const byRows = { quantity: one, holds: 'ndvi', grids: [{ grid, reachM: 2.5, rowsXY: rows }] } as const;
const middle = (cell: number) => (cell % grid.cols) * 2 + 1;

describe('values of the canopy alone', () => {
  const patchy = (_x: number, y: number) => (y > 20 ? 0.25 : 0.15);

  it('hold the vigour of the vines where the mean of all pixels holds the alleys', async () => {
    const tiff = picture(patchy);
    const [all] = await readRasterOntoGrids(tiff, { fileName: 'a.tif' }, { quantity: one, grids: [grid] });
    const [canopy] = await readCanopyOntoGrids(tiff, { fileName: 'a.tif' }, byIndex);
    const worst = (cells: Float32Array) => Math.max(...cells.map((value, cell) => Math.abs(value - vigour(middle(cell)))));
    expect(worst(all!.cells)).toBeGreaterThan(0.25);
    // Canopy within a cell, or borrowed from the next one, stands up to 2.5 m to the side: 2.5 / 300.
    expect(worst(canopy!.cells)).toBeLessThan(0.0085);
    expect(canopy!.canopy.share).toBeCloseTo(0.5 / 2.5, 2);
    expect(canopy!.canopy.threshold).toBeGreaterThan(0.25);
    expect(canopy!.canopy.threshold).toBeLessThan(0.5);
    expect(canopy!.canopy.separability).toBeGreaterThan(0.6);
  });

  it('along rows are the same where rows lie right, whatever grows between them', async () => {
    const [canopy] = await readCanopyOntoGrids(picture(() => 0.75), { fileName: 'a.tif' }, byRows);
    // A strip of 0.6 m over canopy of 0.5 m takes in a pixel of the alley at times.
    const off = canopy!.cells.map((value, cell) => Math.abs(value - vigour(middle(cell))));
    expect(off.reduce((sum, value) => sum + value, 0) / off.length).toBeLessThan(0.05);
    expect(canopy!.canopy.threshold).toBeNull();
  });

  it('along rows that miss the canopy say so by their distance from the alleys', async () => {
    const [right] = await readCanopyOntoGrids(picture(patchy), { fileName: 'a.tif' }, byRows);
    const [wrong] = await readCanopyOntoGrids(picture(patchy, 1.25), { fileName: 'a.tif' }, byRows);
    expect(right!.canopy.separability).toBeGreaterThan(1);
    expect(wrong!.canopy.separability).toBeLessThan(0.5);
  });

  it('make the index of the mean canopy bands', async () => {
    const geo = { epsg: 32631, x: x0, y: y0 + height, pixel };
    const tiff = writeTiff({ width: width / pixel, height: height / pixel, bands: 2, type: 'u16', geo, value: (col, _row, band) => {
      const isCanopy = fromRow((col + 0.5) * pixel) < 0.25;
      return band === 0 ? (isCanopy ? 500 : 2000) : isCanopy ? 4500 : 2500;
    } });
    const [canopy] = await readCanopyOntoGrids(tiff, { fileName: 'a.tif' }, { ...byIndex, quantity: { kind: 'index', index: 'ndvi', bands: { red: 1, nir: 2 } }, holds: null });
    for (const value of canopy!.cells) expect(value).toBeCloseTo(0.8, 6);
    expect(canopy!.bandMeans!.nir![5]).toBe(4500);
  });

  it('are missing where no canopy stands within a row spacing', async () => {
    const geo = { epsg: 32631, x: x0, y: y0 + height, pixel };
    const tiff = writeTiff({ width: width / pixel, height: height / pixel, type: 'f32', geo, value: (col) => ((col + 0.5) * pixel < 30 && fromRow((col + 0.5) * pixel) < 0.25 ? 0.7 : 0.1) });
    const [canopy] = await readCanopyOntoGrids(tiff, { fileName: 'a.tif' }, byIndex);
    expect(canopy!.cells[5]).toBeCloseTo(0.7, 6);
    expect(canopy!.cells[28]).toBeNaN();
  });
});

describe('strips along rows', () => {
  it('hold what lies within half their width of a line, bends and ends included', () => {
    const isOn = rowStrips([[[0, 0], [10, 0], [10, 20]]], 0.3);
    expect([isOn(5, 0.29), isOn(5, 0.31), isOn(10.2, 0.1), isOn(9.8, 19), isOn(10, 20.29), isOn(10, 20.4), isOn(200, 3)]).toEqual([true, false, true, true, true, false, false]);
  });
});
