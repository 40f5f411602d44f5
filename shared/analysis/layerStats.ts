/**
 * What a layer holds inside a block: coverage, mean, spread, quantiles and a histogram.
 * In: cells of a layer. Out: plain numbers for the screen and the database; NaN never leaves (null instead).
 */
import { assertCellCount, valuesInside, type Cells, type Grid } from './grid.ts';
import { quantilesOf } from './quantile.ts';

export interface LayerStats {
  /** Cells inside with a value, and cells inside without. */
  readonly n: number;
  readonly missing: number;
  /** Share of the block's area that lies in cells with a value, 0…1. */
  readonly coverage: number;
  readonly mean: number | null;
  /** Population standard deviation: the cells are the whole block, not a sample of it. */
  readonly sd: number | null;
  readonly min: number | null;
  readonly max: number | null;
  readonly quantiles: { readonly share: number; readonly value: number }[];
  readonly histogram: Histogram | null;
}

export interface Histogram {
  readonly from: number;
  readonly to: number;
  /** Equal bins between from and to; each holds its lower edge, the last also its upper. */
  readonly counts: readonly number[];
}

export interface LayerStatsOptions {
  readonly shares?: readonly number[];
  readonly bins?: number;
}

/** Statistics over the cells at least half inside; coverage is weighted by the area of every cell inside. */
export function layerStats(grid: Grid, cells: Cells, { shares = [0.02, 0.05, 0.25, 0.5, 0.75, 0.95, 0.98], bins = 24 }: LayerStatsOptions = {}): LayerStats {
  assertCellCount(grid, cells, 'The layer');
  const given = valuesInside(grid, cells);
  const insideCount = grid.inside.reduce((sum, inside) => sum + inside, 0);
  const n = given.length;
  const base = { n, missing: insideCount - n, coverage: coverageOf(grid, cells) };
  if (n === 0) return { ...base, mean: null, sd: null, min: null, max: null, quantiles: [], histogram: null };
  const { mean, sd, min, max } = momentsOf(given);
  const ascending = [...shares].sort((a, b) => a - b);
  const values = quantilesOf(given, ascending);
  const quantiles = ascending.map((share, at) => ({ share, value: values[at]! }));
  return { ...base, mean, sd, min, max, quantiles, histogram: histogramOf(given, { from: min, to: max, bins }) };
}

function momentsOf(values: Float32Array): { mean: number; sd: number; min: number; max: number } {
  let [min, max, sum, squares] = [Infinity, -Infinity, 0, 0];
  // Sums around the first value keep the digits of a layer far from 0.
  const origin = values[0]!;
  for (const value of values) {
    min = Math.min(min, value);
    max = Math.max(max, value);
    sum += value - origin;
  }
  const mean = origin + sum / values.length;
  for (const value of values) squares += (value - mean) ** 2;
  return { mean, sd: Math.sqrt(squares / values.length), min, max };
}

/** Share of the block's area in cells that have a value. */
export function coverageOf({ share }: Grid, cells: Cells): number {
  let covered = 0;
  let total = 0;
  for (let cell = 0; cell < cells.length; cell++) {
    const part = share[cell]!;
    total += part;
    if (!Number.isNaN(cells[cell]!)) covered += part;
  }
  return total === 0 ? 0 : covered / total;
}

function histogramOf(values: Float32Array, { from, to, bins }: { from: number; to: number; bins: number }): Histogram {
  const counts = new Array<number>(bins).fill(0);
  const perUnit = to === from ? 0 : bins / (to - from);
  for (const value of values) counts[Math.min(bins - 1, Math.floor((value - from) * perUnit))]!++;
  return { from, to, counts };
}
