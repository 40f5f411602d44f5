import { featureCollection, intersect, multiPolygon, union } from '@turf/turf';
import { describe, expect, it } from 'vitest';
import { eachCellShare } from '../../shared/analysis/cellShares.ts';
import { gridOfOutline, toCellRing, type Grid } from '../../shared/analysis/grid.ts';
import { polygonise, type ZonePolygons } from '../../shared/analysis/polygonise.ts';
import { randomIndex, randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { sieveByBorder } from '../../shared/analysis/sieve.ts';
import { smooth } from '../../shared/analysis/smooth.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { polygonsArea, signedArea } from '../../shared/geo/rings.ts';
import { CORNER, picture, rectangleGrid } from './pictures.ts';

const { x: X, y: Y, epsg } = CORNER;

const ringAt = (points: readonly (readonly [number, number])[]): XY[] => points.map(([x, y]): XY => [X + x, Y + y]);

/** Outlines that try the drawing: on whole cells, with holes, in parts, slanted, ragged. */
function outlineOf(kind: number, random: Random): MultiPolygonXY {
  const box = (west: number, south: number, width: number, height: number) => ringAt([[west, south], [west + width, south], [west + width, south + height], [west, south + height], [west, south]]);
  if (kind === 0) return [[box(0, 0, 60, 40)]];
  if (kind === 1) return [[box(0, 0, 80, 60), [...box(30, 20, 20, 10)].reverse()]];
  if (kind === 2) return [[box(0, 0, 40, 40)], [box(44, 10, 30, 20)]];
  if (kind === 3) return [[box(random(), random(), 3 + 20 * random(), 5 + 40 * random())]];
  if (kind === 4) return [[ringAt([[0, 0], [90, 3], [91, 5], [2, 60], [0, 0]])]];
  const ring = Array.from({ length: 30 }, (_, corner): XY => {
    const radius = 45 * (1 + 0.12 * randomNormal(random));
    return [X + radius * Math.cos((corner / 30) * 2 * Math.PI), Y + radius * Math.sin((corner / 30) * 2 * Math.PI)];
  });
  const outer = [...ring, ring[0]!];
  return kind === 5 ? [[outer]] : [[outer, ringAt([[-9, -8], [-9, 9], [12.3, 4], [-9, -8]])]];
}

/** Noise smoothed over a few metres, cut into as many zones; now and then left raw. */
function zoning(grid: Grid, random: Random): Uint8Array {
  const zones = 2 + randomIndex(random, 4);
  if (random() < 0.3) return grid.inside.map((inside) => (inside === 1 ? 1 + randomIndex(random, zones) : 0));
  const field = smooth(grid, new Float32Array(grid.share.length).map(() => randomNormal(random)), { sigmaM: 2 + 6 * random() });
  const sorted = field.filter((value) => !Number.isNaN(value)).sort();
  const cuts = Array.from({ length: zones - 1 }, (_, cut) => sorted[Math.floor(((cut + 1) * sorted.length) / zones)]!);
  const labels = grid.inside.map((inside, cell) => (inside === 1 ? 1 + cuts.filter((cut) => field[cell]! > cut).length : 0));
  return random() < 0.5 ? labels : sieveByBorder(labels, grid.cols, { minCells: 12 });
}

const cases = Array.from({ length: 42 }, (_, at) => {
  const random = seededRandom(100 + at);
  const outline = outlineOf(at % 7, random);
  const grid = gridOfOutline(outline, epsg, [1, 2, 3][at % 3]!);
  const labels = zoning(grid, random);
  const simplifyCells = [0, 2, 6][Math.floor(at / 7) % 3]!;
  return { at, grid, labels, zones: polygonise(grid, labels, { simplifyCells }), outline };
});

/** Kilometres from the corner, where the plane arithmetic of Turf keeps all digits. */
const forTurf = (polygons: MultiPolygonXY) => multiPolygon(polygons.map((rings) => rings.map((ring) => ring.map(([x, y]) => [(x - X) / 1000, (y - Y) / 1000]))));
const planeAreaM2 = (feature: ReturnType<typeof union>) => {
  if (feature === null) return 0;
  const polygons = feature.geometry.type === 'Polygon' ? [feature.geometry.coordinates] : feature.geometry.coordinates;
  return polygonsArea(polygons as [number, number][][][]) * 1e6;
};

describe('zones as polygons', () => {
  it('follow the cells', () => {
    const { labels } = picture('1122 1122 1122 1122');
    const zones = polygonise(rectangleGrid(4, 4, 10), labels);
    expect(zones.map(({ zone, polygonsXY }) => [zone, polygonsXY.length, polygonsXY[0]!.length])).toEqual([[1, 1, 1], [2, 1, 1]]);
    zones.forEach(({ areaM2 }) => expect(areaM2).toBeCloseTo(800, -1));
    // The border is one straight line of two points, half a centimetre off the cells' edge at most.
    for (const { polygonsXY } of zones) {
      expect(polygonsXY[0]![0]!.length).toBe(5);
      expect(polygonsXY[0]![0]!.filter(([x]) => Math.abs(x - X - 20) < 0.006).length).toBeGreaterThanOrEqual(2);
    }
  });

  it('keep an island as a hole, and a hole in the block as no ground', () => {
    const { labels } = picture('11111 12221 12221 12221 11111');
    const zones = polygonise(rectangleGrid(5, 5, 10), labels, { simplifyCells: 0 });
    expect(zones.map(({ polygonsXY }) => polygonsXY.map((rings) => rings.length))).toEqual([[2], [1]]);
    // The island loses its four corners, each half of a quarter cell.
    expect(zones[1]!.areaM2).toBeCloseTo(900 - 4 * 12.5, 6);
    expect(zones[0]!.areaM2 + zones[1]!.areaM2).toBeCloseTo(2500, 6);
  });

  it('turn a staircase into one straight line', () => {
    const { labels } = picture('1222222 1122222 1112222 1111222 1111122 1111112 1111111');
    const [first] = polygonise(rectangleGrid(7, 7, 2), labels, { simplifyCells: 0.5 });
    const within = first!.polygonsXY[0]![0]!.filter(([x, y]) => x > X + 0.01 && x < X + 13.99 && y > Y - 13.99 && y < Y - 0.01);
    expect(within.length).toBeLessThanOrEqual(2);
  });

  it('of one label are the outline', () => {
    const grid = gridOfOutline(outlineOf(6, seededRandom(1)), epsg, 2);
    const [zone, ...others] = polygonise(grid, grid.inside);
    expect(others).toEqual([]);
    expect(zone!.polygonsXY[0]!.map((ring) => ring.length)).toEqual(grid.outlineXY[0]!.map((ring) => ring.length));
  });

  it('let two zones that meet cross-wise pass each other: the lower stays whole, no ring touches itself', () => {
    const { labels } = picture('1122 1122 2211 2211');
    const zones = polygonise(rectangleGrid(4, 4, 10), labels, { simplifyCells: 0 });
    expect(zones.map(({ polygonsXY }) => polygonsXY.length)).toEqual([1, 2]);
  });

  it('are the same every time, and leave the labels alone', () => {
    const { grid, labels, zones } = cases[5]!;
    const before = labels.slice();
    expect(polygonise(grid, labels, { simplifyCells: 0 })).toEqual(zones);
    expect(labels).toEqual(before);
  });

  it('ask for at least one zone', () => {
    expect(() => polygonise(rectangleGrid(3, 3), new Uint8Array(9))).toThrow('No cell inside the block carries a zone.');
  });
});

describe.each(cases)('zones of block $at', ({ grid, labels, zones, outline }) => {
  const allRings = (key: 'polygonsXY' | 'polygonsLonLat') => zones.flatMap((zone) => (zone[key] as readonly (readonly (readonly (readonly [number, number])[])[])[]).flat());

  it('add up to the area of the block, and no zone with a cell of its own is lost', () => {
    const total = zones.reduce((sum, { areaM2 }) => sum + areaM2, 0);
    expect(Math.abs(total / polygonsArea(outline) - 1)).toBeLessThan(1e-9);
    zones.forEach(({ areaM2, polygonsXY }) => expect(polygonsArea(polygonsXY)).toBeCloseTo(areaM2, 6));
    const deepInside = new Set(labels.filter((_, cell) => grid.share[cell] === 1));
    expect(zones.map(({ zone }) => zone)).toEqual(expect.arrayContaining([...deepInside].filter((label) => labels.filter((own) => own === label).length > 9)));
  });

  it('leave no gap and overlap nowhere: every quarter cell is covered exactly as the block covers it', () => {
    const fine = { ...grid, cellSizeM: grid.cellSizeM / 4, cols: grid.cols * 4, rows: grid.rows * 4 };
    const difference = new Float64Array(fine.cols * fine.rows);
    const add = (polygons: MultiPolygonXY, sign: number) => eachCellShare(polygons.map((rings) => rings.map((ring) => toCellRing(ring, fine))), fine, (cell, share) => (difference[cell]! += sign * share));
    add(outline, -1);
    for (const { polygonsXY } of zones) add(polygonsXY, 1);
    expect(difference.reduce((worst, value) => Math.max(worst, Math.abs(value)), 0)).toBeLessThan(1e-6);
  });

  it('have closed rings, wound for GeoJSON, in metres and in degrees', () => {
    for (const key of ['polygonsXY', 'polygonsLonLat'] as const) {
      for (const zone of zones) {
        for (const rings of zone[key] as readonly (readonly (readonly (readonly [number, number])[])[])[]) {
          rings.forEach((ring, index) => {
            expect(ring.length).toBeGreaterThanOrEqual(4);
            expect(ring[ring.length - 1]).toEqual(ring[0]);
            expect(Math.sign(signedArea(ring))).toBe(index === 0 ? 1 : -1);
          });
        }
      }
    }
  });

  it('share their borders point for point, in degrees too: every stretch is walked once each way or lies on the outline', () => {
    for (const key of ['polygonsXY', 'polygonsLonLat'] as const) {
      const stretches = new Map<string, number>();
      for (const ring of allRings(key)) for (let at = 0; at + 1 < ring.length; at++) stretches.set(`${ring[at]} ${ring[at + 1]}`, (stretches.get(`${ring[at]} ${ring[at + 1]}`) ?? 0) + 1);
      let alone = 0;
      for (const [stretch, times] of stretches) {
        expect(times).toBe(1);
        const [a, b] = stretch.split(' ');
        if (!stretches.has(`${b} ${a}`)) alone += lengthOf(a!, b!, key);
      }
      const around = outline.flat().reduce((sum, ring) => sum + ring.slice(1).reduce((inner, [x, y], at) => inner + Math.hypot(x - ring[at]![0], y - ring[at]![1]), 0), 0);
      if (key === 'polygonsXY') expect(alone).toBeCloseTo(around, 3);
      else expect(alone).toBeGreaterThan(0);
    }
  });
});

// Second method, for zonings of a moderate number of pieces.
it.each(cases.filter(({ zones }) => zones.flatMap(({ polygonsXY }) => polygonsXY).length < 150))('zones of block $at are disjoint and fill it by the polygon clipping of Turf too', ({ zones, outline }) => {
  const shapes = zones.map(({ polygonsXY }) => forTurf(polygonsXY));
  const whole = shapes.length === 1 ? shapes[0]! : union(featureCollection(shapes));
  expect(planeAreaM2(whole) / polygonsArea(outline)).toBeCloseTo(1, 7);
  shapes.forEach((a, at) => shapes.slice(at + 1).forEach((b) => expect(planeAreaM2(intersect(featureCollection([a, b])))).toBeLessThan(1e-3)));
});

function lengthOf(a: string, b: string, key: keyof ZonePolygons): number {
  if (key !== 'polygonsXY') return 1;
  const [ax, ay] = a.split(',').map(Number);
  const [bx, by] = b.split(',').map(Number);
  return Math.hypot(bx! - ax!, by! - ay!);
}
