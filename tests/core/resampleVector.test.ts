import { describe, expect, it } from 'vitest';
import { PointIndex } from '../../shared/analysis/pointIndex.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { polygonClasses, polygonMeans } from '../../shared/analysis/resamplePolygons.ts';
import { inverseDistance, type ValuedPoints } from '../../shared/analysis/resamplePoints.ts';
import type { MultiPolygonXY } from '../../shared/geo/coordinates.ts';
import { CORNER, pictureGrid, picture, rectangleGrid } from './pictures.ts';

const { x: X, y: Y } = CORNER;

/** Rectangle by its distance in metres east and south of the corner. */
const box = (west: number, north: number, east: number, south: number): MultiPolygonXY => [[[[X + west, Y - north], [X + west, Y - south], [X + east, Y - south], [X + east, Y - north], [X + west, Y - north]]]];

describe('polygons with a number', () => {
  it('give each cell the mean weighted by shared area', () => {
    // Cells of 2 m: the border at 2.5 m cuts the second column ¼ : ¾.
    const cells = polygonMeans(rectangleGrid(3, 1, 2), [
      { polygonsXY: box(0, 0, 2.5, 2), value: 80 },
      { polygonsXY: box(2.5, 0, 9, 2), value: 120 },
    ]);
    expect(Array.from(cells)).toEqual([80, 110, 120]);
  });

  it('leave cells missing where no polygon with a value reaches', () => {
    const cells = polygonMeans(rectangleGrid(4, 1, 2), [
      { polygonsXY: box(0, 0, 1, 2), value: 0 },
      { polygonsXY: box(2, 0, 4, 2), value: null },
      { polygonsXY: box(4, 0, 6, 2), value: NaN },
      { polygonsXY: box(6, 0, 8, 1), value: 7 },
    ]);
    expect(Array.from(cells)).toEqual([0, NaN, NaN, 7]);
  });
});

describe('polygons with a class', () => {
  const grid = rectangleGrid(3, 1, 2);

  it('give each cell the class with the largest share, parts of one class together', () => {
    const { cells, classes } = polygonClasses(grid, [
      { polygonsXY: box(0, 0, 2, 0.7), value: 'loam' },
      { polygonsXY: box(0, 0.7, 2, 1.6), value: 'clay' },
      { polygonsXY: box(0, 1.6, 2, 2), value: 'loam' },
      { polygonsXY: box(2, 0, 4, 2), value: 'sand' },
      { polygonsXY: box(4, 0, 6, 2), value: null },
    ]);
    expect(classes).toEqual(['clay', 'loam', 'sand']);
    expect(Array.from(cells)).toEqual([1, 2, NaN]);
  });

  it('take the first class in order on a tie, whatever order they come in', () => {
    const halves = [
      { polygonsXY: box(0, 0, 1, 2), value: 'b' },
      { polygonsXY: box(1, 0, 2, 2), value: 'a' },
    ];
    for (const features of [halves, [...halves].reverse()]) {
      const { cells, classes } = polygonClasses(grid, features);
      expect(classes[cells[0]!]).toBe('a');
    }
  });
});

describe('points by inverse distance', () => {
  const points = (rows: readonly (readonly [number, number, number])[]): ValuedPoints => ({
    x: Float64Array.from(rows, ([x]) => X + x),
    y: Float64Array.from(rows, ([, y]) => Y - y),
    value: Float64Array.from(rows, ([, , value]) => value),
  });

  // Source: gstat 2.1-0 (idw, idp = 2), and the formula by hand.
  it('agree with gstat on four points', () => {
    const four = points([[0, 0, 0.5], [10, 0, 0.62], [0, 10, 0.55], [15, 12, 0.7]]);
    const cells = inverseDistance(rectangleGrid(9, 9, 1.25), four);
    // Cell (3, 3) has its centre at 4.375; a grid with a centre at 5 is made of cells of 2 m.
    expect(cells.length).toBe(81);
    expect(inverseDistance(rectangleGrid(5, 5, 2), four)[2 * 5 + 2]).toBeCloseTo(0.571086519, 7);
  });

  it('take the value of a point at the centre of the cell, the mean of several there', () => {
    expect(inverseDistance(rectangleGrid(2, 1, 2), points([[1, 1, 5], [3, 1, 9], [3, 1, 11]]))).toEqual(Float32Array.from([5, 10]));
  });

  it('use the nearest twelve within reach, found as by looking at every point', () => {
    const random = seededRandom(11);
    const rows = Array.from({ length: 900 }, () => [random() ** 2 * 120, random() * 90, random()] as const);
    const grid = rectangleGrid(60, 40, 2);
    for (const reachM of [6, 40]) {
      const cells = inverseDistance(grid, points(rows), { reachM });
      for (let cell = 0; cell < cells.length; cell += 7) {
        const [x, y] = [((cell % 60) + 0.5) * 2, (Math.floor(cell / 60) + 0.5) * 2];
        const near = rows.map(([px, py, value]) => ({ square: (px - x) ** 2 + (py - y) ** 2, value })).filter(({ square }) => square <= reachM ** 2);
        const nearest = near.sort((a, b) => a.square - b.square).slice(0, 12);
        const expected = nearest.reduce((sum, { square, value }) => sum + value / square, 0) / nearest.reduce((sum, { square }) => sum + 1 / square, 0);
        if (nearest.length === 0) expect(cells[cell]).toBeNaN();
        else expect(cells[cell]).toBeCloseTo(expected, 5);
      }
    }
  });

  it('leave cells out of reach and outside the block missing', () => {
    const grid = pictureGrid(picture('1.1111111'), 2);
    const cells = inverseDistance(grid, points([[1, 1, 4]]), { reachM: 9 });
    expect(Array.from(cells, (value) => (Number.isNaN(value) ? '-' : value))).toEqual([4, '-', 4, 4, 4, '-', '-', '-', '-']);
    expect(inverseDistance(grid, points([])).every(Number.isNaN)).toBe(true);
  });
});

describe('the index of points', () => {
  it('finds all within a distance, also for points on one spot or line', () => {
    const random = seededRandom(2);
    for (const spread of [[100, 100], [100, 0], [0, 0]] as const) {
      const x = Float64Array.from({ length: 200 }, () => random() * spread[0]);
      const y = Float64Array.from({ length: 200 }, () => random() * spread[1]);
      const index = new PointIndex(x, y);
      for (const place of [[50, 50], [-20, 3], [99, 0]] as const) {
        const near = Array.from(x, (px, point) => ({ point, distance: Math.hypot(px - place[0], y[point]! - place[1]) })).filter(({ distance }) => distance <= 30);
        expect(Array.from(index.within(place, 30)).sort((a, b) => a - b)).toEqual(near.map(({ point }) => point));
      }
    }
  });
});
