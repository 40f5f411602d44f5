import { describe, expect, it } from 'vitest';
import { mixedScale } from '../../server/placing/scaleAlarm.ts';
import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';
import { sensorStripes } from '../../shared/analysis/layerStripes.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { sceneMarks } from '../../shared/analysis/sceneFitness.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { markedGround } from '../../src/lib/markedGround.ts';

const [x0, y0] = [500_000, 4_700_000];
const rectangle = (width: number, height: number): Grid => gridOfOutline([[[[x0, y0], [x0 + width, y0], [x0 + width, y0 + height], [x0, y0 + height], [x0, y0]]]], 32630, 2);
const grid = rectangle(240, 200);
const random = seededRandom(7);
/** Uniform around 0. */
const noise = () => random() - 0.5;
const cellsOf = (value: (x: number, y: number) => number) => Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => value((cell % grid.cols) * 2 + 1, 200 - Math.floor(cell / grid.cols) * 2 - 1));

describe('stripes of a sensor', () => {
  it('are found with their bearing, width and the cells that lie above', () => {
    // Swaths of 24 m along east–west with levels of their own.
    const levels = [0, 0.9, 0.1, 1, -0.1, 0.8, 0.2, 1, 0];
    const found = sensorStripes(grid, cellsOf((_x, y) => levels[Math.floor(y / 24)]! + 0.3 * noise()), { showsRows: false })!;
    expect(found.bearingDeg).toBe(90);
    expect(found.widthM).toBeGreaterThan(18);
    expect(found.widthM).toBeLessThan(32);
    const cell = (x: number, y: number) => Math.floor((200 - y) / 2) * grid.cols + Math.floor(x / 2);
    expect([found.cells[cell(100, 36)], found.cells[cell(100, 60)], found.cells[cell(40, 84)]]).toEqual([1, 0, 1]);
  });

  it('are found across the rows at 30° from north', () => {
    const angle = (30 * Math.PI) / 180;
    // Distance square to a line that bears 30°.
    const found = sensorStripes(grid, cellsOf((x, y) => Math.sign(Math.sin(((x * Math.cos(angle) - y * Math.sin(angle)) * Math.PI) / 18)) + 0.4 * noise()), { showsRows: false })!;
    expect(found.bearingDeg).toBe(30);
  });

  it('are not seen in noise, a slope, a hump, a border between two soils or a constant', () => {
    const quiet: ((x: number, y: number) => number)[] = [() => noise(), (x, y) => x / 100 + y / 300 + 0.2 * noise(), (x, y) => Math.exp(-(((x - 120) / 60) ** 2) - ((y - 90) / 50) ** 2) + 0.2 * noise(), (x) => (x < 120 ? 0 : 1) + 0.3 * noise(), () => 0.4];
    for (const field of quiet) expect(sensorStripes(grid, cellsOf(field), { showsRows: false })).toBeNull();
  });
});

describe('cloud and shadow', () => {
  // Canopy and soil of a common July scene: red 0.06 to 0.12, near infrared 0.30 to 0.42.
  const scene = (patch: (x: number, y: number) => { red: number; nir: number } | null) => ({
    red: cellsOf((x, y) => patch(x, y)?.red ?? 0.09 + 0.02 * Math.sin(x / 9)),
    nir: cellsOf((x, y) => patch(x, y)?.nir ?? 0.36 + 0.05 * Math.cos(y / 11)),
  });
  const within = (x: number, y: number, size: number) => x > 40 && x < 40 + size && y > 40 && y < 40 + size;
  const areaOf = (marks: Uint8Array) => 4 * marks.reduce((sum, mark) => sum + mark, 0);

  it('are marked where they lie', () => {
    const cloudy = sceneMarks(grid, scene((x, y) => (within(x, y, 40) ? { red: 0.45, nir: 0.55 } : null)))!;
    expect([areaOf(cloudy.cloud), areaOf(cloudy.shadow)]).toEqual([1600, 0]);
    const shaded = sceneMarks(grid, scene((x, y) => (within(x, y, 30) ? { red: 0.03, nir: 0.12 } : null)))!;
    expect([areaOf(shaded.cloud), areaOf(shaded.shadow)]).toEqual([0, 900]);
  });

  it('are not bare soil, a lush canopy or a spot of a few metres', () => {
    for (const ground of [{ red: 0.25, nir: 0.34 }, { red: 0.04, nir: 0.55 }, { red: 0.2, nir: 0.22 }]) {
      const marks = sceneMarks(grid, scene((x, y) => (within(x, y, 40) ? ground : null)))!;
      expect([areaOf(marks.cloud), areaOf(marks.shadow)]).toEqual([0, 0]);
    }
    expect(areaOf(sceneMarks(grid, scene((x, y) => (within(x, y, 8) ? { red: 0.45, nir: 0.55 } : null)))!.cloud)).toBe(0);
  });

  it('cannot be told without visible light or near infrared', () => {
    expect(sceneMarks(grid, { nir: cellsOf(() => 0.4), redEdge: cellsOf(() => 0.2) })).toBeNull();
    expect(sceneMarks(grid, { red: cellsOf(() => 0.1) })).toBeNull();
  });
});

describe('feet taken for metres', () => {
  const ring = (width: number, height: number): LonLat[] => ([[0, 0], [width, 0], [width, height], [0, height], [0, 0]] as const).map(([x, y]) => fromUtm([x0 + x, y0 + y], 32630));
  const block = (width: number, height: number) => [[ring(width, height)]] as unknown as MultiPolygonLonLat;

  it('show in an outline 3.28 times as long and as wide as a block, or as all of them', () => {
    expect(mixedScale(ring(787, 656), [block(240, 200)], 32630)).toBeCloseTo(3.2808, 3);
    expect(mixedScale(ring(73, 61), [block(240, 200)], 32630)).toBeCloseTo(0.3048, 4);
  });

  it('do not in a picture as large as the block, wider than it, or of another shape', () => {
    for (const [width, height] of [[240, 200], [260, 220], [787, 400], [1500, 1500]] as const) expect(mixedScale(ring(width, height), [block(240, 200)], 32630)).toBeNull();
  });
});

describe('marked ground', () => {
  const lonLat = ([[0, 0], [240, 0], [240, 200], [0, 200], [0, 0]] as const).map(([x, y]) => fromUtm([500_000 + x, 4_700_000 + y], 32630));
  const block = { boundary: { coordinates: [[lonLat]] }, cellSizeM: 2 };

  it('is a rectangle for a corner, with its area and its side of the block', () => {
    const marks = Uint8Array.from({ length: grid.cols * grid.rows }, (_, cell) => (cell % grid.cols >= 90 && Math.floor(cell / grid.cols) < 25 ? 0b10 : 0b01));
    const ground = markedGround(block, marks, 1)!;
    expect(ground.geometry.coordinates).toHaveLength(1);
    expect(ground.part).toBe('northEast');
    expect(ground.areaM2).toBeCloseTo(60 * 50, -1);
    expect(ground.share).toBeCloseTo(3000 / 48_000, 3);
    expect(markedGround(block, marks, 0)!.part).toBe('middle');
    expect(markedGround(block, marks, 2)).toBeNull();
  });

  it('is none for marks of another outline', () => expect(markedGround(block, new Uint8Array(10).fill(1), 0)).toBeNull());
});
