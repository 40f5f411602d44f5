import { readFileSync } from 'node:fs';
import { unzipSync } from 'fflate';
import { fromArrayBuffer } from 'geotiff';
import { parseShp } from 'shpjs';
import { beforeAll, describe, expect, it } from 'vitest';
import { eachCellShare } from '../../shared/analysis/cellShares.ts';
import { cellsOfGround } from '../../shared/analysis/editsGround.ts';
import { gridOfOutline, toCellRing, type GridFrame } from '../../shared/analysis/grid.ts';
import { indexCells } from '../../shared/analysis/indices.ts';
import { polygonMeans } from '../../shared/analysis/resamplePolygons.ts';
import { sieveByLargestNeighbour } from '../../shared/analysis/sieve.ts';
import { terrainOf } from '../../shared/analysis/terrain.ts';
import type { MultiPolygonLonLat, MultiPolygonXY, PolygonLonLat } from '../../shared/geo/coordinates.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';
import { polygonsToUtm } from '../../shared/geo/utm.ts';

// Real ground near Olinda, Brazil: satellite bands, elevation, census tracts (see tests/fixtures/rasters/SOURCES.md).
// Expected values: GDAL/OGR 3.6.2 with numpy 1.24.2, unless a test says otherwise.

const EPSG = 32725;
const frame: GridFrame = { x0: 291683.25000072917, y0: 9118110.250028804, cellSizeM: 28.5, cols: 104, rows: 93 };
const fixture = (name: string) => new URL(`../fixtures/rasters/${name}`, import.meta.url);

async function bandsOf(name: string): Promise<Float32Array[]> {
  const bytes = readFileSync(fixture(name));
  const file = await fromArrayBuffer(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength) as ArrayBuffer);
  const bands = await (await file.getImage()).readRasters();
  return (Array.from(bands as unknown as ArrayLike<ArrayLike<number>>) as ArrayLike<number>[]).map((band) => Float32Array.from(band));
}

interface Tract {
  readonly id: number;
  readonly lonLat: MultiPolygonLonLat;
  readonly xy: MultiPolygonXY;
}

let ndvi: Float32Array;
let elevation: Float32Array;
let tracts: Tract[];

beforeAll(async () => {
  const [red, nir] = await bandsOf('l7_red_nir.tif');
  ndvi = indexCells('ndvi', { red: red!, nir: nir! });
  [elevation] = (await bandsOf('dem.tif')) as [Float32Array];
  const entries = unzipSync(readFileSync(fixture('tracts.shp.zip')));
  const { buffer, byteOffset, byteLength } = Object.entries(entries).find(([name]) => name.endsWith('.shp'))![1];
  const shapes = parseShp(new DataView(buffer, byteOffset, byteLength)) as { coordinates: PolygonLonLat }[];
  tracts = [332, 333, 334, 338, 341].map((id, at) => {
    const lonLat = [shapes[at]!.coordinates];
    return { id, lonLat, xy: polygonsToUtm(lonLat, EPSG) };
  });
});

const meanOf = (cells: readonly number[], values: Float32Array) => cells.reduce((sum, cell) => sum + values[cell]!, 0) / cells.length;

describe('real ground', () => {
  it('has the vegetation index that numpy finds', () => {
    expect(ndvi.length).toBe(104 * 93);
    expect(meanOf([...ndvi.keys()], ndvi)).toBeCloseTo(0.20285444, 6);
  });

  // Source: pyproj 3.4.1 and Shapely 1.8.5.
  it('has tracts of the same area in the plane', () => {
    const expected = new Map([[332, 898846.288], [333, 474102.616], [334, 985631.721], [338, 1262683.485], [341, 516896.038]]);
    for (const { id, xy } of tracts) expect(polygonsArea(xy)).toBeCloseTo(expected.get(id)!, 2);
  });

  it('has the same mean index per tract by cell centres', () => {
    const expected = new Map<number, readonly [number, number]>([[332, [1105, 0.27307939]], [333, [584, 0.26761711]], [334, [1213, 0.26086197]], [338, [1554, 0.25973478]], [341, [633, 0.16632221]]]);
    const grid = { ...gridOfOutline(tracts.flatMap(({ xy }) => xy), EPSG, 28.5), ...frame };
    for (const { id, lonLat } of tracts) {
      const cells = cellsOfGround(grid, { shape: 'polygons', polygonsLonLat: lonLat });
      expect([id, cells.length]).toEqual([id, expected.get(id)![0]]);
      expect(meanOf(cells, ndvi)).toBeCloseTo(expected.get(id)![1], 6);
    }
  });

  // Source: each pixel intersected with the union of the tracts by Shapely 1.8.5.
  it('has the same mean index over the block by exact shares of pixels', () => {
    let sum = 0;
    let weight = 0;
    for (const { xy } of tracts) {
      eachCellShare(xy.map((rings) => rings.map((ring) => toCellRing(ring, frame))), frame, (cell, share) => {
        sum += share * ndvi[cell]!;
        weight += share;
      });
    }
    expect(sum / weight).toBeCloseTo(0.25189657813, 7);
    expect(weight * 28.5 ** 2).toBeCloseTo(4138160.148, 2);
  });

  it('puts each tract on a grid without losing ground between them', () => {
    const grid = gridOfOutline(tracts.flatMap(({ xy }) => xy), EPSG, 20);
    const ones = polygonMeans(grid, tracts.map(({ xy }) => ({ polygonsXY: xy, value: 1 })));
    grid.share.forEach((share, cell) => share > 0.001 && expect(ones[cell]).toBeCloseTo(1, 6));
  });

  it('has the slope and aspect that gdaldem finds', () => {
    const expected = {
      horn: { mean: 5.1263217, at: [[10, 10, 1.3601936, 9.942596], [50, 40, 7.1559997, 181.813782], [70, 80, 4.2778778, 111.168121], [33, 60, 3.0392585, 230.697632]] },
      zevenbergenThorne: { mean: 5.2145385, at: [[10, 10, 1.3301501, 10.527512], [50, 40, 7.0932565, 182.271088], [70, 80, 4.093965, 102.949165], [33, 60, 2.8665059, 227.805130]] },
    } as const;
    for (const method of ['horn', 'zevenbergenThorne'] as const) {
      const { slopeDeg, aspectDeg } = terrainOf({ elevation, cols: 104, cellSizeM: 28.5 }, method);
      const inner = [...slopeDeg.keys()].filter((cell) => cell % 104 > 0 && cell % 104 < 103 && cell > 104 && cell < 104 * 92);
      expect(meanOf(inner, slopeDeg)).toBeCloseTo(expected[method].mean, 4);
      for (const [col, row, slope, aspect] of expected[method].at) {
        expect(slopeDeg[row * 104 + col]).toBeCloseTo(slope, 3);
        expect(aspectDeg[row * 104 + col]).toBeCloseTo(aspect, 2);
      }
    }
  });

  // Source: SieveFilter of GDAL 3.6.2 on the same classes; cells per class, cells changed, and Σ class × (cell mod 997).
  it.each([
    [2, 4, [0, 73, 1166, 1971, 5386, 1076], 360, 17181849],
    [12, 4, [0, 61, 1212, 1578, 6227, 594], 1929, 17112299],
    [12, 8, [0, 54, 1163, 1654, 6130, 671], 1235, 17164080],
    [40, 4, [0, 0, 1348, 921, 7199, 204], 3178, 17181515],
  ] as const)('is sieved to %i cells, %i-connected, cell for cell as GDAL does', (minCells, connectivity, perClass, changed, sum) => {
    const classes = Uint8Array.from(ndvi, (value) => 1 + Math.min(4, Math.max(0, Math.floor((value + 0.4371) / 0.2031))));
    const sieved = sieveByLargestNeighbour(classes, 104, { minCells, connectivity });
    expect([0, 1, 2, 3, 4, 5].map((label) => sieved.filter((own) => own === label).length)).toEqual(perClass);
    expect(sieved.filter((label, cell) => label !== classes[cell]).length).toBe(changed);
    expect(sieved.reduce((total, label, cell) => total + label * (cell % 997), 0)).toBe(sum);
  });
});
