import { describe, expect, it } from 'vitest';
import { indexAt, indexCells, INDICES, type IndexId } from '../../shared/analysis/indices.ts';
import { aspectDegOf, gradientOf, slopeDegOf, terrainOf, wetness } from '../../shared/analysis/terrain.ts';

describe('vegetation indices', () => {
  // Reflectances of two surfaces; expected values computed with numpy 1.24.2 from the published formulas.
  const dense = { nir: 0.45, red: 0.05, green: 0.08, redEdge: 0.2 };
  const thin = { nir: 0.38, red: 0.09, green: 0.11, redEdge: 0.24 };
  it.each([
    ['ndvi', 0.8, 0.617021277],
    ['gndvi', 0.698113208, 0.551020408],
    ['ndre', 0.384615385, 0.225806452],
    ['ratio', 9, 4.222222222],
    ['savi', 0.6, 0.448453608],
    ['osavi', 0.70303030303, 0.533968254],
    ['osaviPlain', 0.606060606, 0.46031746],
    ['msavi2', 0.629843788, 0.439091846],
  ] as [IndexId, number, number][])('%s has its published form', (id, ofDense, ofThin) => {
    expect(indexAt(id, dense)).toBeCloseTo(ofDense, 8);
    expect(indexAt(id, thin)).toBeCloseTo(ofThin, 8);
  });

  it('are missing where the bands say nothing, and zero is a value', () => {
    expect(indexAt('ndvi', { nir: 0, red: 0 })).toBeNaN();
    expect(indexAt('ndvi', { nir: -0.2, red: 0.1 })).toBeNaN();
    expect(indexAt('ndvi', { nir: 0.1, red: 0.1 })).toBe(0);
    expect(indexAt('ndvi', { nir: 0.1, red: -0.02 })).toBe(1);
    expect(indexAt('ratio', { nir: 0.4, red: 0 })).toBeNaN();
    for (const id of Object.keys(INDICES) as IndexId[]) expect(indexAt(id, { nir: NaN, red: 0.1, green: 0.1, redEdge: 0.1 })).toBeNaN();
  });

  it('work cell by cell, also on digital numbers', () => {
    const cells = indexCells('ndvi', { nir: Float32Array.from([79, 41, NaN]), red: Float32Array.from([46, 141, 5]) });
    // Two pixels of a Landsat-7 scene, by gdal_calc.
    expect(cells[0]).toBeCloseTo(0.264, 6);
    expect(cells[1]).toBeCloseTo(-0.549451, 6);
    expect(cells[2]).toBeNaN();
  });

  it('ask for the band that is missing', () => {
    expect(() => indexCells('ndre', { nir: Float32Array.from([1]), red: Float32Array.from([1]) })).toThrow('The index ndre needs the bands nir and redEdge; say which band of the file is redEdge.');
  });
});

describe('slope and aspect', () => {
  // Expected values: gdaldem of GDAL 3.6.2 (slope and aspect, also -alg ZevenbergenThorne), and the formulas by hand.
  const cases = [
    { window: [50, 45, 50, 30, 30, 30, 8, 10, 10], cellSizeM: 5, horn: [75.25766, 380.0329, 180.75385], zevenbergenThorne: [74.0546, 350, 180] },
    { window: [101, 92, 85, 101, 92, 85, 101, 91, 84], cellSizeM: 5, horn: [58.4197, 162.673, 92.64255], zevenbergenThorne: [58.04479, 160.312, 93.57633] },
    { window: [12, 12, 12, 10, 10, 10, 8, 8, 8], cellSizeM: 10, horn: [11.309932, 20, 180], zevenbergenThorne: [11.309932, 20, 180] },
  ];
  it.each(cases)('of the window $window agree with gdaldem', ({ window, cellSizeM, ...expected }) => {
    for (const method of ['horn', 'zevenbergenThorne'] as const) {
      const gradient = gradientOf(window, cellSizeM, method);
      expect(slopeDegOf(gradient)).toBeCloseTo(expected[method][0]!, 4);
      expect(100 * Math.tan((slopeDegOf(gradient) * Math.PI) / 180)).toBeCloseTo(expected[method][1]!, 3);
      expect(aspectDegOf(gradient)).toBeCloseTo(expected[method][2]!, 4);
    }
  });

  it('has no aspect on flat ground', () => {
    expect(aspectDegOf(gradientOf(new Array(9).fill(3), 1))).toBeNaN();
  });

  /** A plane that falls by `fall` per metre towards a bearing. */
  const plane = (bearingDeg: number, fall: number) =>
    Float32Array.from({ length: 30 }, (_, cell) => {
      const [east, north] = [(cell % 6) * 2, -Math.floor(cell / 6) * 2];
      const bearing = (bearingDeg * Math.PI) / 180;
      return 50 - fall * (east * Math.sin(bearing) + north * Math.cos(bearing));
    });

  it('of a plane are the same up to the edge, by both methods', () => {
    for (const bearingDeg of [0, 37, 90, 200, 315]) {
      for (const method of ['horn', 'zevenbergenThorne'] as const) {
        const terrain = terrainOf({ elevation: plane(bearingDeg, 0.12), cols: 6, cellSizeM: 2 }, method);
        const sine = Math.sin(Math.atan(0.12));
        for (let cell = 0; cell < 30; cell++) {
          expect(terrain.slopeDeg[cell]).toBeCloseTo((Math.atan(0.12) * 180) / Math.PI, 3);
          expect(Math.abs(((terrain.aspectDeg[cell]! - bearingDeg + 540) % 360) - 180)).toBeLessThan(0.01);
          expect(terrain.northness[cell]).toBeCloseTo(Math.cos((bearingDeg * Math.PI) / 180) * sine, 5);
          expect(terrain.eastness[cell]).toBeCloseTo(Math.sin((bearingDeg * Math.PI) / 180) * sine, 5);
        }
      }
    }
  });

  it('bridge missing neighbours, and are missing where the height is', () => {
    const elevation = plane(120, 0.2);
    elevation[14] = NaN;
    const { slopeDeg, northness } = terrainOf({ elevation, cols: 6, cellSizeM: 2 });
    expect(slopeDeg[14]).toBeNaN();
    expect(northness[14]).toBeNaN();
    for (const cell of [7, 8, 9, 13, 15, 19, 20, 21]) expect(slopeDeg[cell]).toBeCloseTo((Math.atan(0.2) * 180) / Math.PI, 3);
  });

  it('face nowhere on flat ground, which is not a missing value', () => {
    const flat = terrainOf({ elevation: new Float32Array(9).fill(7), cols: 3, cellSizeM: 1 });
    expect(flat.slopeDeg[4]).toBe(0);
    expect(flat.northness[4]).toBeCloseTo(0, 12);
    expect(flat.eastness[4]).toBeCloseTo(0, 12);
    expect(flat.aspectDeg[4]).toBeNaN();
  });
});

describe('topographic wetness', () => {
  // Expected values computed with numpy 1.24.2 from ln(a / tan β).
  it.each([
    [100, 5, 7.041416],
    [250, 2, 8.876134],
    [1000, 0.5, 11.649104],
    [30, 12, 4.949745],
  ])('of %d m²/m at %d° is %d', (area, slopeDeg, expected) => {
    expect(wetness(area, slopeDeg)).toBeCloseTo(expected, 6);
  });

  it('stays finite on flat ground', () => {
    expect(wetness(50, 0)).toBeCloseTo(Math.log(50_000), 10);
  });
});
