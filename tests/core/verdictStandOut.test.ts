import { describe, expect, it } from 'vitest';
import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { evidenceField } from '../../shared/analysis/verdictField.ts';
import { groundThatStandsOut, zonesThatShow } from '../../shared/analysis/verdictStandOut.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import { polygonsArea, polygonsCentroid } from '../../shared/geo/rings.ts';
import { polygonsToUtm } from '../../shared/geo/utm.ts';
import type { ZoningLayer } from '../../shared/analysis/zoningTypes.ts';
import { added, smoothField, whiteField } from '../bench/simulatedFields.ts';

const CELL_M = 2;

/** Two hectares with a strip across it and a corner, as wide as asked for. */
function strangeBlock(wide: number, high: number, { stripM, cornerM }: { stripM: number; cornerM: number }): { grid: Grid; truth: Uint8Array } {
  const grid = gridOfOutline([[[[0, 0], [wide, 0], [wide, high], [0, high], [0, 0]]]], 32631, CELL_M);
  const truth = Uint8Array.from(grid.inside, (inside, cell) => {
    const x = ((cell % grid.cols) + 0.5) * CELL_M;
    const y = (Math.floor(cell / grid.cols) + 0.5) * CELL_M;
    return inside === 0 ? 0 : x > 0.6 * wide && x < 0.6 * wide + stripM ? 2 : x < cornerM && y < cornerM ? 3 : 1;
  });
  return { grid, truth };
}

/** Levels by true zone with noise of a standard deviation of about one, half of it alike over nine metres. */
function layersOf(grid: Grid, truth: Uint8Array, { levels, seed }: { levels: readonly (readonly number[])[]; seed: number }): ZoningLayer[] {
  const random = seededRandom(seed);
  return levels.map((level, l) => {
    const values = added(added(Float64Array.from(truth, (zone) => level[zone]!), whiteField(grid, random), 0.7), smoothField(grid, 9, random), 0.7);
    return { id: `${l}`, type: l === 0 ? 'vigour' : 'conductivity', role: 'evidence', kind: 'number', cells: Float32Array.from(values, (value, cell) => (grid.inside[cell] === 1 ? value : NaN)), weight: null };
  });
}

const standOut = (times: number) => [[0, 0, -times, times], [0, 0, 0.8 * times, 0.6 * times]];

describe('a strip of five rows and a corner of a twenty-fifth', () => {
  it.each([[140, 140], [200, 100]])('are zones of their own on %i × %i m when they stand out by six deviations', (wide, high) => {
    const { grid, truth } = strangeBlock(wide, high, { stripM: 12.5, cornerM: 28 });
    const inside = [...truth.keys()].filter((cell) => truth[cell]! > 0);
    for (const seed of [500, 501, 502]) {
      const { verdict, advisedK, candidates } = makeZoning({ grid, layers: layersOf(grid, truth, { levels: standOut(6), seed }), options: { seed } });
      expect([verdict.verdict, advisedK, verdict.reasons[0]!.code]).toEqual(['several', 3, 'stands-out']);
      expect(adjustedRandIndex(inside.map((cell) => truth[cell]!), inside.map((cell) => candidates[2]!.labels[cell]!))).toBeGreaterThan(0.95);
      expect(Math.abs(verdict.reasons[0]!.figures.hectares! - inside.filter((cell) => truth[cell]! > 1).length * 4e-4)).toBeLessThan(0.03);
    }
  });

  it('keep the block from being treated as one when no number of zones shows them', () => {
    const { grid, truth } = strangeBlock(140, 140, { stripM: 0, cornerM: 28 });
    const { verdict, advisedK, standsOut } = makeZoning({ grid, layers: layersOf(grid, truth, { levels: standOut(3), seed: 500 }), options: { seed: 0 } });
    expect([verdict.verdict, advisedK, verdict.reasons[0]!.code]).toEqual(['test', 1, 'stands-out-apart']);
    expect(verdict.reasons.map(({ code }) => code)).not.toContain('no-structure');
    // It is drawn where it lies: round the corner that was put there, in the north-west (rows of cells go south), on as much ground as the reason names.
    const drawn = polygonsToUtm(standsOut!, grid.epsg);
    const [x, y] = polygonsCentroid(drawn);
    expect(Math.hypot(x - 14, y - (140 - 14))).toBeLessThan(6);
    expect(Math.abs(polygonsArea(drawn) / 1e4 - verdict.reasons[0]!.figures.hectares!)).toBeLessThan(0.01);
  });

  it('draw nothing apart where zones show them or nothing stands out', () => {
    const { grid, truth } = strangeBlock(140, 140, { stripM: 12.5, cornerM: 28 });
    expect(makeZoning({ grid, layers: layersOf(grid, truth, { levels: standOut(6), seed: 500 }), options: { seed: 500 } }).standsOut).toBeNull();
    expect(makeZoning({ grid, layers: layersOf(grid, truth, { levels: standOut(0), seed: 500 }), options: { seed: 500 } }).standsOut).toBeNull();
  });

  it('say nothing where one sensor has them alone, as a swath would, in nine of ten blocks', () => {
    const { grid, truth } = strangeBlock(140, 140, { stripM: 17.5, cornerM: 0 });
    const seeds = Array.from({ length: 10 }, (_, seed) => seed);
    const verdicts = seeds.map((seed) => makeZoning({ grid, layers: layersOf(grid, truth, { levels: [[0, 0, -2.5, 0], [0, 0, 0, 0]], seed }) }).verdict.verdict);
    expect(verdicts.filter((verdict) => verdict === 'one').length).toBeGreaterThanOrEqual(9);
    expect(verdicts).not.toContain('several');
  });
});

describe('stripes and what only looks like them', () => {
  const square = (side: number) => gridOfOutline([[[[0, 0], [side, 0], [side, side], [0, side], [0, 0]]]], 32631, 3);
  const evidence = (grid: Grid, layers: readonly Float64Array[]) => evidenceField(grid, layers.map((layer) => Float32Array.from(layer)), { mostCells: 2500 });
  const east = (grid: Grid, cell: number) => ((cell % grid.cols) + 0.5) * grid.cellSizeM;
  const south = (grid: Grid, cell: number) => (Math.floor(cell / grid.cols) + 0.5) * grid.cellSizeM;
  const form = (grid: Grid, valueAt: (x: number, y: number) => number) => Float64Array.from(grid.inside, (_, cell) => valueAt(east(grid, cell), south(grid, cell)));
  /** Swaths with levels of their own, across a direction between two of the 36. */
  const swaths = (grid: Grid, widthM: number, seed: number) => {
    const random = seededRandom(seed);
    const levels = Array.from({ length: 1000 }, () => 2 * randomNormal(random));
    return form(grid, (x, y) => levels[500 + Math.floor((x * Math.cos(0.57) + y * Math.sin(0.57)) / widthM)]!);
  };
  const seeds = [11, 12, 13, 14];

  it('a corner of 40 m in one layer alone of 20 ha is seen, though rows and columns through it stand out of all directions', () => {
    const grid = square(447);
    for (const seed of seeds) {
      const random = seededRandom(seed);
      const field = evidence(grid, [added(whiteField(grid, random), form(grid, (x, y) => (x < 40 && y < 40 ? 8 : 0)), 1), whiteField(grid, random)]);
      expect(groundThatStandsOut(field, seededRandom(1))?.areas).toHaveLength(1);
    }
  });

  it.each([3, 6, 10])('swaths of %i m that two layers of one flight have in common are none', (widthM) => {
    const grid = square(141);
    for (const seed of seeds) {
      const random = seededRandom(seed);
      const shared = swaths(grid, widthM, seed);
      expect(groundThatStandsOut(evidence(grid, [added(whiteField(grid, random), shared, 1), added(whiteField(grid, random), shared, 1)]), seededRandom(1))).toBeNull();
    }
  });

  it.each([[141, 12.5], [141, 17.5], [447, 12.5]])('on a side of %i m a strip of %d m in two layers is ground', (side, stripM) => {
    const grid = square(side);
    for (const seed of seeds) {
      const random = seededRandom(seed);
      const strip = form(grid, (x) => (x > 0.6 * side && x < 0.6 * side + stripM ? 6 : 0));
      expect(groundThatStandsOut(evidence(grid, [added(whiteField(grid, random), strip, 1), added(whiteField(grid, random), strip, 1)]), seededRandom(1))).not.toBeNull();
    }
  });
});

describe('ground that stands out', () => {
  const { grid, truth } = strangeBlock(140, 140, { stripM: 12, cornerM: 28 });
  const field = (times: number) => evidenceField(grid, layersOf(grid, truth, { levels: standOut(times), seed: 9 }).map(({ cells }) => cells), { mostCells: 2500 });

  it('is found where it is, and not where there is none', () => {
    const found = groundThatStandsOut(field(6), seededRandom(1))!;
    expect(found.areas).toHaveLength(2);
    expect(found.farthest).toBeGreaterThan(found.limit);
    expect(found.parts[Math.round(14 / found.cellSizeM) * found.width + Math.round(14 / found.cellSizeM)]).toBeGreaterThan(0);
    expect(groundThatStandsOut(field(0), seededRandom(1))).toBeNull();
  });

  it('is shown by zones that are made of it, and not by those that cut the rest', () => {
    const found = groundThatStandsOut(field(6), seededRandom(1))!;
    const cutInTwo = truth.map((zone, cell) => (zone === 1 && cell % grid.cols > 20 ? 4 : zone));
    const stripOnly = truth.map((zone) => (zone === 3 ? 1 : zone));
    const shown = (labels: Uint8Array, k: number) => zonesThatShow(found, grid, [{ k, labels }]);
    expect(shown(truth, 3)).toEqual({ k: 3, share: 1 });
    expect(shown(cutInTwo, 4)).toBeNull();
    expect(shown(stripOnly, 2)!.share).toBeCloseTo(12 * 140 / (12 * 140 + 28 * 28), 1);
  });
});
