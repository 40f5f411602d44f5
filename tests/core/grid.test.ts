import { intersect, featureCollection, polygon } from '@turf/turf';
import { describe, expect, it } from 'vitest';
import { decodeFloatCells, decodeLabels, encodeCells } from '../../shared/analysis/cellBytes.ts';
import { assertCellCount, cellAt, cellCentre, defineGrid, gridOfOutline } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { polygonsArea, signedArea } from '../../shared/geo/rings.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { CORNER, rectangleGrid } from './pictures.ts';

const [X, Y] = [CORNER.x, CORNER.y];
const at = (points: readonly (readonly [number, number])[]): XY[] => points.map(([x, y]): XY => [X + x, Y + y]);
const sumOf = (values: ArrayLike<number>) => Array.from(values).reduce((sum, value) => sum + value, 0);

/** A star-shaped outline with a hole. */
function star(seed: number): MultiPolygonXY {
  const random = seededRandom(seed);
  const ring = Array.from({ length: 24 }, (_, corner): XY => {
    const radius = 30 * (1 + 0.3 * randomNormal(random) * 0.5);
    const angle = (corner / 24) * 2 * Math.PI;
    return [X + 50 + radius * Math.cos(angle), Y + 50 + radius * Math.sin(angle)];
  });
  return [[[...ring, ring[0]!], at([[48, 47], [47, 53], [53.5, 52.25], [48, 47]])]];
}

describe('the grid of a block', () => {
  it('has full cells only for a rectangle on whole cells', () => {
    const grid = rectangleGrid(5, 3, 2);
    expect([grid.x0, grid.y0, grid.cols, grid.rows]).toEqual([X, Y, 5, 3]);
    expect(Array.from(grid.share)).toEqual(new Array(15).fill(1));
    expect(Array.from(grid.inside)).toEqual(new Array(15).fill(1));
  });

  it('begins on whole multiples of the cell size west and north of the outline', () => {
    const grid = gridOfOutline([[at([[0.5, -0.5], [3.5, -0.5], [3.5, 2.5], [0.5, 2.5], [0.5, -0.5]])]], CORNER.epsg, 2);
    expect([grid.x0, grid.y0, grid.cols, grid.rows]).toEqual([X, Y + 4, 2, 3]);
    // Rows from the north: y 2…4, 0…2, −2…0; of each cell the part inside, by hand.
    expect(Array.from(grid.share)).toEqual([0.1875, 0.1875, 0.75, 0.75, 0.1875, 0.1875]);
    expect(Array.from(grid.inside)).toEqual([0, 0, 1, 1, 0, 0]);
  });

  it('gives a triangle its exact part of every cell', () => {
    const grid = gridOfOutline([[at([[0, 0], [3, 0], [0, 3], [0, 0]])]], CORNER.epsg, 1);
    expect(Array.from(grid.share)).toEqual([0.5, 0, 0, 1, 0.5, 0, 1, 1, 0.5]);
    expect(Array.from(grid.inside)).toEqual([1, 0, 0, 1, 1, 0, 1, 1, 1]);
  });

  it('takes holes off and adds up several parts, whatever way the rings run', () => {
    const outer = at([[0, 0], [4, 0], [4, 4], [0, 4], [0, 0]]);
    const hole = at([[1, 1], [3, 1], [3, 2.5], [1, 2.5], [1, 1]]);
    const other = at([[6, 0], [7.5, 0], [7.5, 1], [6, 1], [6, 0]]);
    const grid = gridOfOutline([[outer, hole], [other]], CORNER.epsg, 1);
    const turned = gridOfOutline([[[...outer].reverse(), [...hole].reverse()], [[...other].reverse()]], CORNER.epsg, 1);
    expect(Array.from(grid.share)).toEqual([1, 1, 1, 1, 0, 0, 0, 0, 1, 0.5, 0.5, 1, 0, 0, 0, 0, 1, 0, 0, 1, 0, 0, 0, 0, 1, 1, 1, 1, 0, 0, 1, 0.5]);
    expect(Array.from(turned.share)).toEqual(Array.from(grid.share));
  });

  // Second method: each cell intersected with the outline by Turf, areas by the shoelace formula.
  it.each([1, 2, 3, 4])('agrees with cell-by-cell intersection, outline %i', (seed) => {
    const outline = star(seed);
    const grid = gridOfOutline(outline, CORNER.epsg, 4);
    // Turf works in the plane of the numbers it is given; kilometres from the corner keep them small.
    const local = polygon(outline[0]!.map((ring) => ring.map(([x, y]) => [(x - X) / 1000, (y - Y) / 1000])));
    grid.share.forEach((share, cell) => {
      const [x, y] = cellCentre(grid, cell);
      const [west, south] = [(x - 2 - X) / 1000, (y - 2 - Y) / 1000];
      const square = polygon([[[west, south], [west + 0.004, south], [west + 0.004, south + 0.004], [west, south + 0.004], [west, south]]]);
      const common = intersect(featureCollection([local, square]));
      const parts = common === null ? [] : common.geometry.type === 'Polygon' ? [common.geometry.coordinates] : common.geometry.coordinates;
      const expected = parts.reduce((sum, rings) => sum + rings.reduce((inner, ring) => inner + signedArea(ring as [number, number][]), 0), 0) / 0.004 ** 2;
      expect(share).toBeCloseTo(expected, 6);
    });
  });

  it('holds exactly the area of the outline, at any cell size', () => {
    for (const cellSizeM of [0.7, 1, 2, 3, 10, 200]) {
      const outline = star(9);
      const grid = gridOfOutline(outline, CORNER.epsg, cellSizeM);
      expect(sumOf(grid.share) * cellSizeM ** 2).toBeCloseTo(polygonsArea(outline), 2);
    }
  });

  it('is the same every time, and its key changes with outline and cell size', () => {
    const lonLat = star(5).map((rings) => rings.map((ring) => ring.map((xy) => fromUtm(xy, CORNER.epsg))));
    const grid = defineGrid(lonLat, 2);
    expect(grid.epsg).toBe(CORNER.epsg);
    expect(defineGrid(lonLat, 2)).toEqual(grid);
    expect(defineGrid(lonLat, 3).key).not.toBe(grid.key);
    const moved = lonLat.map((rings) => rings.map((ring) => ring.map(([lon, lat], corner) => [corner === 3 ? lon + 1e-6 : lon, lat] as const)));
    expect(defineGrid(moved, 2).key).not.toBe(grid.key);
  });

  it('takes no cells of another', () => {
    expect(() => assertCellCount(rectangleGrid(4, 4), new Float32Array(20), 'Layer "EC"')).toThrow('Layer "EC" has 20 cells; the grid has 16.');
  });

  it('knows the cell of a position and the centre of a cell', () => {
    const grid = rectangleGrid(5, 3, 2);
    expect(cellCentre(grid, 7)).toEqual([X + 5, Y - 3]);
    expect(cellAt(grid, [X + 5, Y - 3])).toBe(7);
    expect(cellAt(grid, [X, Y])).toBe(0);
    expect(cellAt(grid, [X + 10, Y - 1])).toBe(-1);
    expect(cellAt(grid, [X - 0.001, Y - 1])).toBe(-1);
  });

  it('refuses outlines without area, outlines that cover ground twice, and absurd cell sizes', () => {
    expect(() => gridOfOutline([[at([[0, 0], [5, 0], [0, 0]])]], CORNER.epsg, 1)).toThrow(/no area/);
    expect(() => gridOfOutline([[at([[0, 0], [4, 0], [4, 4], [0, 4], [0, 0]])], [at([[2, 2], [6, 2], [6, 6], [2, 6], [2, 2]])]], CORNER.epsg, 1)).toThrow(/covers some ground twice/);
    const square = [[at([[0, 0], [4, 0], [4, 4], [0, 4], [0, 0]])]];
    for (const cellSizeM of [0, -2, NaN, Infinity]) expect(() => gridOfOutline(square, CORNER.epsg, cellSizeM)).toThrow(`A cell size of ${cellSizeM} m cannot be used`);
    expect(() => gridOfOutline([[at([[0, 0], [5000, 0], [5000, 5000], [0, 5000], [0, 0]])]], CORNER.epsg, 0.5)).toThrow(/Use larger cells/);
  });
});

describe('cells as bytes', () => {
  it('come back as they were, missing cells included, also from the middle of a buffer', () => {
    const cells = Float32Array.from([1.5, NaN, -3e30, 0, -0]);
    const bytes = encodeCells(cells);
    const shifted = new Uint8Array(bytes.length + 3);
    shifted.set(bytes, 3);
    expect(decodeFloatCells(shifted.subarray(3))).toEqual(cells);
    expect(decodeLabels(encodeCells(Uint8Array.from([0, 1, 255])))).toEqual(Uint8Array.from([0, 1, 255]));
  });

  it('have a fixed layout, little-endian', () => {
    expect(Array.from(encodeCells(Float32Array.from([1])))).toEqual([67, 69, 76, 76, 1, 1, 0, 0, 1, 0, 0, 0, 0, 0, 128, 63]);
    expect(Array.from(encodeCells(Uint8Array.from([7, 9])))).toEqual([67, 69, 76, 76, 1, 2, 0, 0, 2, 0, 0, 0, 7, 9]);
  });

  it('do not share memory with what they are read from', () => {
    const bytes = encodeCells(Uint8Array.from([7]));
    const labels = decodeLabels(bytes);
    bytes[12] = 0;
    expect(labels[0]).toBe(7);
  });

  it('are refused when cut off, of another type or not cells at all', () => {
    const bytes = encodeCells(Float32Array.from([1, 2]));
    expect(() => decodeFloatCells(bytes.subarray(0, 19))).toThrow(/19 bytes where 2 cells need 20/);
    expect(() => decodeFloatCells(bytes.subarray(0, 5))).toThrow(/do not begin as cells do/);
    expect(() => decodeLabels(bytes)).toThrow(/type 1 is not 2/);
    expect(() => decodeFloatCells(Uint8Array.from([67, 69, 76, 76, 9, 1, 0, 0, 0, 0, 0, 0]))).toThrow(/version 9 is not 1/);
    expect(() => decodeLabels(Uint8Array.from(new Array(40).fill(1)))).toThrow(/cannot be read/);
  });
});
