/**
 * What a layer holds inside a block: coverage, mean, spread, quantiles and a histogram.
 * In: cells of a layer. Out: plain numbers for the screen and the database; NaN never leaves (null instead).
 */
import { assertCellCount, type Cells, type Grid } from './grid.ts';
import { quantileOfSorted } from './quantile.ts';

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
  const sorted = cells.filter((value, cell) => grid.inside[cell] === 1 && !Number.isNaN(value)).sort();
  const insideCount = grid.inside.reduce((sum, inside) => sum + inside, 0);
  const n = sorted.length;
  const base = { n, missing: insideCount - n, coverage: coverageOf(grid, cells) };
  if (n === 0) return { ...base, mean: null, sd: null, min: null, max: null, quantiles: [], histogram: null };
  const origin = sorted[0]!;
  const mean = sorted.reduce((sum, value) => sum + (value - origin), 0) / n + origin;
  const variance = sorted.reduce((sum, value) => sum + (value - mean) ** 2, 0) / n;
  return {
    ...base,
    mean,
    sd: Math.sqrt(variance),
    min: origin,
    max: sorted[n - 1]!,
    quantiles: shares.map((share) => ({ share, value: quantileOfSorted(sorted, share) })),
    histogram: histogramOf(sorted, bins),
  };
}

/** Share of the block's area in cells that have a value. */
export function coverageOf(grid: Grid, cells: Cells): number {
  let covered = 0;
  let total = 0;
  for (let cell = 0; cell < cells.length; cell++) {
    total += grid.share[cell]!;
    if (!Number.isNaN(cells[cell]!)) covered += grid.share[cell]!;
  }
  return total === 0 ? 0 : covered / total;
}

function histogramOf(sorted: Float32Array, bins: number): Histogram {
  const from = sorted[0]!;
  const to = sorted[sorted.length - 1]!;
  const counts = new Array<number>(bins).fill(0);
  for (const value of sorted) {
    const bin = to === from ? 0 : Math.min(bins - 1, Math.floor(((value - from) / (to - from)) * bins));
    counts[bin]!++;
  }
  return { from, to, counts };
}
