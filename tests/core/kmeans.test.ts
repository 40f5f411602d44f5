import { readFileSync } from 'node:fs';
import { kmeans as mlKmeans } from 'ml-kmeans';
import { describe, expect, it } from 'vitest';
import { assignToCentres, fitKMeans } from '../../shared/analysis/kmeans.ts';
import { refineCentres } from '../../shared/analysis/kmeansLloyd.ts';
import { pointTable, sampleIndices, type PointTable } from '../../shared/analysis/kmeansPoints.ts';
import { seedCentres } from '../../shared/analysis/kmeansSeeding.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

function readTable(name: string): number[][] {
  const lines = readFileSync(new URL(`../fixtures/${name}`, import.meta.url), 'utf8').trim().split('\n');
  return lines.slice(1).map((line) => line.split(',').map(Number));
}

function standardised(rows: number[][]): number[][] {
  const columns = rows[0]!.map((_, c) => rows.map((row) => row[c]!));
  const stats = columns.map((column) => {
    const mean = column.reduce((a, b) => a + b, 0) / column.length;
    return { mean, sd: Math.sqrt(column.reduce((a, b) => a + (b - mean) ** 2, 0) / column.length) };
  });
  return rows.map((row) => row.map((value, c) => (value - stats[c]!.mean) / stats[c]!.sd));
}

/** Wheat plots as yield and the mean of the 3 × 3 plots around, edges repeated; 25 columns, 20 rows. */
function wheatWithFocalMean(): number[][] {
  const plots = readTable('tables/wheatPlots.csv').map((row) => row[2]!);
  const at = (row: number, col: number) => plots[Math.min(19, Math.max(0, row)) * 25 + Math.min(24, Math.max(0, col))]!;
  return plots.map((plot, i) => {
    const row = Math.floor(i / 25);
    const col = i % 25;
    let sum = 0;
    for (let dr = -1; dr <= 1; dr++) for (let dc = -1; dc <= 1; dc++) sum += at(row + dr, col + dc);
    return [plot, sum / 9];
  });
}

const iris = readTable('tables/iris.csv').map((row) => row.slice(0, 4));
const inertia = (points: PointTable, k: number, seed = 1) => fitKMeans(points, { k, random: seededRandom(seed) }).inertia;

describe('k-means', () => {
  // Best partitions of raw iris; R 4.2.2 stats::kmeans and scikit-learn 1.2.1 agree.
  it.each([
    [2, 152.347952],
    [3, 78.851441],
    [4, 57.228473],
    [5, 46.446182],
    [6, 39.039987],
  ])('finds the best partition of iris into %i', (k, best) => {
    expect(Math.abs(inertia(pointTable(iris), k) - best)).toBeLessThan(1e-4);
  });

  it('gives the sizes and centres of the iris partition into three', () => {
    const fit = fitKMeans(pointTable(iris), { k: 3, random: seededRandom(5) });
    const sizes = [0, 1, 2].map((zone) => fit.labels.filter((label) => label === zone).length);
    expect([...sizes].sort((a, b) => a - b)).toEqual([38, 50, 62]);
    const largest = sizes.indexOf(62);
    const expected = [5.901613, 2.748387, 4.393548, 1.433871]; // R 4.2.2
    expected.forEach((value, f) => expect(fit.centres[largest * 4 + f]).toBeCloseTo(value, 5));
  });

  it('splits nine points in three corners with a sum of squares of 4', () => {
    const nine = pointTable([[1, 1], [1, 2], [2, 1], [8, 8], [8, 9], [9, 8], [1, 9], [2, 9], [1, 8]]);
    expect(inertia(nine, 3)).toBeCloseTo(4, 9); // three right triangles of legs 1: 4/3 each
  });

  // Proven optima of standardised wheat yields (Mercer & Hall 1911) by exact one-dimensional dynamic programming.
  it.each([
    [2, 172.0836],
    [3, 90.4532],
    [4, 56.2025],
    [5, 36.5451],
    [6, 25.6457],
  ])('reaches the proven optimum of wheat yields for %i zones within the known slack', (k, optimum) => {
    const found = inertia(pointTable(standardised(readTable('tables/wheatPlots.csv').map((row) => [row[2]!]))), k);
    expect(found).toBeGreaterThan(optimum - 1e-3);
    expect(found).toBeLessThan(optimum * (k <= 4 ? 1.001 : 1.01));
  });

  // Best of many starts with scikit-learn 1.2.1 and R 4.2.2 Hartigan–Wong, whichever is lower.
  it.each([
    [2, 432.449],
    [3, 313.634],
    [4, 245.515],
    [5, 198.822],
    [6, 171.612],
  ])('is not caught by the poor local optima of wheat yield and its neighbourhood mean, %i zones', (k, best) => {
    const points = pointTable(standardised(wheatWithFocalMean()));
    for (const seed of [1, 2, 3]) expect(inertia(points, k, seed)).toBeLessThan(best * (k <= 4 ? 1.001 : 1.01));
    expect(inertia(points, k)).toBeGreaterThan(best * 0.9999);
  });

  it.each([
    [2, 6449.564],
    [3, 3972.2],
    [4, 3180.749],
    [5, 2610.441],
    [6, 2174.411],
  ])('reaches the reference on 5 089 real satellite and elevation cells, %i zones, searching on a part of them', (k, best) => {
    const cells = pointTable(standardised(readTable('olinda/blockCells.csv').map((row) => row.slice(2))));
    const found = inertia(cells, k);
    expect(found).toBeGreaterThan(best * 0.9999);
    expect(found).toBeLessThan(best * (k <= 4 ? 1.001 : 1.01));
  });

  it('agrees with ml-kmeans when both start from the same centres', () => {
    const random = seededRandom(11);
    const rows = Array.from({ length: 400 }, (_, i) => [randomNormal(random) + (i % 4) * 3, randomNormal(random), randomNormal(random) - (i % 2) * 4]);
    const points = pointTable(rows);
    for (const k of [2, 4, 6]) {
      const start = seedCentres(points, k, random);
      const initialization = Array.from({ length: k }, (_, zone) => [...start.slice(zone * 3, zone * 3 + 3)]);
      const theirs = mlKmeans(rows, k, { initialization, maxIterations: 1000, tolerance: 0 });
      const sum = rows.reduce((total, row, i) => total + row.reduce((d, value, f) => d + (value - theirs.centroids[theirs.clusters[i]!]![f]!) ** 2, 0), 0);
      expect(refineCentres(points, start, 1000).inertia).toBeCloseTo(sum, 6);
    }
  });

  it('gives the same bytes for the same seed and leaves its input alone', () => {
    const points = pointTable(iris);
    const before = points.values.slice();
    const runs = [1, 2].map(() => fitKMeans(points, { k: 4, random: seededRandom(99) }));
    expect(runs[0]!.centres).toEqual(runs[1]!.centres);
    expect(runs[0]!.labels).toEqual(runs[1]!.labels);
    expect(points.values).toEqual(before);
  });

  it('keeps every zone filled when a start leaves one empty', () => {
    const points = pointTable([[0], [0.1], [10], [10.1]]);
    const run = refineCentres(points, Float64Array.from([0, 500, 600]));
    expect(new Set(run.labels).size).toBe(3);
  });

  it('ends when there are fewer different points than zones', () => {
    const run = fitKMeans(pointTable([[1], [1], [1], [2]]), { k: 3, random: seededRandom(1) });
    expect(run.inertia).toBe(0);
  });

  it('refuses more zones than points with a message that says what to do', () => {
    expect(() => fitKMeans(pointTable([[1], [2]]), { k: 3, random: seededRandom(1) })).toThrow(/3 zones .* 2 cells; ask for fewer/);
  });

  it('labels unseen points by the nearest centre', () => {
    expect([...assignToCentres(pointTable([[0], [4], [6], [9]]), Float64Array.from([0, 10]))]).toEqual([0, 0, 1, 1]);
  });

  it('draws different indices in ascending order, and all when asked for more than there are', () => {
    const drawn = [...sampleIndices(100, 10, seededRandom(3))];
    expect(new Set(drawn).size).toBe(10);
    expect(drawn).toEqual([...drawn].sort((a, b) => a - b));
    expect([...sampleIndices(3, 10, seededRandom(3))]).toEqual([0, 1, 2]);
  });
});
