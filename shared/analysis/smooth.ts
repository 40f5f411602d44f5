/**
 * Gaussian smoothing that stops at the block's edge: Gaussian(value × mask) / Gaussian(mask), where the mask is 1 for
 * cells inside with a value (normalised convolution, Knutsson & Westin 1993). In and out: cells, NaN where missing.
 * Separable, cut off at 4 sigma. Cost: cells × (8 sigma / cell size).
 */
import { assertCellCount, type Cells, type Grid } from './grid.ts';

export interface SmoothOptions {
  readonly sigmaM: number;
  /** Also give missing cells inside a value, where one lies within reach. */
  readonly fillMissing?: boolean;
}

/** A field of equal values stays as it is up to the edge; `smooth(grid, cells, { sigmaM: 3 })`. */
export function smooth(grid: Grid, cells: Cells, { sigmaM, fillMissing = false }: SmoothOptions): Cells {
  assertCellCount(grid, cells, 'The layer');
  const known = (cell: number) => grid.inside[cell] === 1 && !Number.isNaN(cells[cell]!);
  const weighted = new Float64Array(cells.length);
  const mask = new Float64Array(cells.length);
  for (let cell = 0; cell < cells.length; cell++) {
    if (!known(cell)) continue;
    weighted[cell] = cells[cell]!;
    mask[cell] = 1;
  }
  const kernel = gaussianHalf(sigmaM / grid.cellSizeM);
  const above = blur(weighted, kernel, grid.cols);
  const below = blur(mask, kernel, grid.cols);
  const out = new Float32Array(cells.length).fill(NaN);
  for (let cell = 0; cell < cells.length; cell++) {
    const wanted = fillMissing ? grid.inside[cell] === 1 && below[cell]! > 1e-12 : mask[cell] === 1;
    if (wanted) out[cell] = above[cell]! / below[cell]!;
  }
  return out;
}

/** Kernel weights for offsets 0, 1, 2 … cells; the whole kernel sums to 1. */
function gaussianHalf(sigmaCells: number): Float64Array {
  const reach = Math.max(0, Math.floor(4 * sigmaCells + 0.5));
  const half = new Float64Array(reach + 1).map((_, offset) => (offset === 0 ? 1 : Math.exp(-0.5 * (offset / sigmaCells) ** 2)));
  const total = half.reduce((sum, weight, offset) => sum + (offset === 0 ? weight : 2 * weight), 0);
  return half.map((weight) => weight / total);
}

function blur(values: Float64Array, half: Float64Array, cols: number): Float64Array {
  return blurDown(blurAcross(values, half, cols), half, cols);
}

function blurAcross(values: Float64Array, half: Float64Array, cols: number): Float64Array {
  const out = new Float64Array(values.length);
  const reach = half.length - 1;
  const padded = new Float64Array(cols + 2 * reach);
  for (let from = 0; from < values.length; from += cols) {
    padded.set(values.subarray(from, from + cols), reach);
    for (let col = 0; col < cols; col++) {
      let sum = half[0]! * padded[col + reach]!;
      for (let offset = 1; offset <= reach; offset++) sum += half[offset]! * (padded[col + reach - offset]! + padded[col + reach + offset]!);
      out[from + col] = sum;
    }
  }
  return out;
}

/** Row by row, so that memory is read in order. */
function blurDown(values: Float64Array, half: Float64Array, cols: number): Float64Array {
  const out = new Float64Array(values.length);
  for (let to = 0; to < values.length; to += cols) {
    for (let offset = 1 - half.length; offset < half.length; offset++) {
      const from = to + offset * cols;
      if (from < 0 || from >= values.length) continue;
      const weight = half[Math.abs(offset)]!;
      for (let col = 0; col < cols; col++) out[to + col]! += weight * values[from + col]!;
    }
  }
  return out;
}
