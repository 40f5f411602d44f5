/**
 * The evidence layers as the verdict looks at them: on one plane, averaged in squares where the grid is finer than needed,
 * only where every layer has a value, each clipped to its 0.5 and 99.5 percentiles and standardised.
 * In: grid, layers in their own units. Out: mask and standardised values, 0 outside the mask.
 */

import { AnalysisError } from './analysisError.ts';
import type { MaskedPlane } from './covariance.ts';
import type { Grid } from './grid.ts';
import { quantileOfSorted } from './quantile.ts';

export interface EvidenceField extends MaskedPlane {
  readonly cellSizeM: number;
  /** Cells of the mask. */
  readonly cellCount: number;
  /** width × height values a layer, mean 0 and standard deviation 1 over the mask. */
  readonly layers: readonly Float64Array[];
}

const LEAST_CELLS = 30;

export interface FieldOptions {
  /** Average until no more cells than this are left … */
  readonly mostCells?: number;
  /** … or up to this cell size, whichever is asked for. Cells are never made smaller. */
  readonly coarsestCellM?: number;
}

/** Throws AnalysisError when no layer is given, too few cells have all layers, or a layer has one value only. */
export function evidenceField(grid: Grid, layers: readonly ArrayLike<number>[], { mostCells = Infinity, coarsestCellM = 0 }: FieldOptions): EvidenceField {
  const mask = commonCells(grid, layers);
  const count = cellsIn(mask);
  if (layers.length === 0 || count < LEAST_CELLS) {
    throw new AnalysisError('no-common-cells', `The chosen layers have ${count} cells in common; at least ${LEAST_CELLS} are needed. Leave out the layer that covers least, or use smaller cells.`);
  }
  const bySize = Math.floor(coarsestCellM / grid.cellSizeM + 1e-9);
  const byCount = Math.ceil(Math.sqrt(count / mostCells) - 1e-9);
  const side = Math.max(1, bySize, byCount);
  return standardiseField(averageSquares({ width: grid.cols, height: grid.rows, mask }, layers, side), grid.cellSizeM * side);
}

/** 1 for each cell inside the block that has every layer. */
export function commonCells({ inside }: Grid, layers: readonly ArrayLike<number>[]): Uint8Array {
  const mask = new Uint8Array(inside);
  for (const layer of layers) {
    for (let cell = 0; cell < mask.length; cell++) if (Number.isNaN(layer[cell]!)) mask[cell] = 0;
  }
  return mask;
}

function cellsIn(mask: Uint8Array): number {
  let count = 0;
  for (let cell = 0; cell < mask.length; cell++) count += mask[cell]!;
  return count;
}

interface RawField extends MaskedPlane {
  readonly layers: readonly Float64Array[];
}

/** Means over squares of side × side cells; a square counts when at least half of its cells do. */
function averageSquares(plane: MaskedPlane, layers: readonly ArrayLike<number>[], side: number): RawField {
  const width = Math.ceil(plane.width / side);
  const height = Math.ceil(plane.height / side);
  const counts = new Float64Array(width * height);
  const sums = layers.map(() => new Float64Array(width * height));
  const inSquares = { side, width, plane };
  addToSquares(counts, null, inSquares);
  layers.forEach((layer, l) => addToSquares(sums[l]!, layer, inSquares));
  const mask = Uint8Array.from(counts, (cells) => (cells >= (side * side) / 2 ? 1 : 0));
  return { width, height, mask, layers: sums.map((sum) => sum.map((total, square) => (mask[square] === 1 ? total / counts[square]! : 0))) };
}

interface Squares {
  readonly side: number;
  /** Squares across. */
  readonly width: number;
  readonly plane: MaskedPlane;
}

/** Adds each masked cell's value to its square; without a layer each cell counts as one. */
function addToSquares(sums: Float64Array, layer: ArrayLike<number> | null, { side, width, plane }: Squares): void {
  const { mask } = plane;
  for (let row = 0, cell = 0; row < plane.height; row++) {
    let square = Math.floor(row / side) * width;
    for (let col = 0, left = side; col < plane.width; col++, cell++, left--) {
      if (left === 0) [square, left] = [square + 1, side];
      if (mask[cell] !== 0) sums[square]! += layer === null ? 1 : layer[cell]!;
    }
  }
}

function standardiseField(raw: RawField, cellSizeM: number): EvidenceField {
  const cellCount = cellsIn(raw.mask);
  return { width: raw.width, height: raw.height, mask: raw.mask, cellSizeM, cellCount, layers: raw.layers.map((layer) => standardiseClipped(layer, raw.mask)) };
}

/**
 * Clipped to the 0.5 and 99.5 percentiles of the masked values (linear interpolation between order statistics), minus the
 * mean, over the standard deviation with divisor n; 0 outside the mask.
 */
export function standardiseClipped(values: ArrayLike<number>, mask: Uint8Array): Float64Array {
  const sorted = Float64Array.from(values).filter((_, cell) => mask[cell] === 1).sort();
  const low = quantileOfSorted(sorted, 0.005);
  const high = quantileOfSorted(sorted, 0.995);
  const clipped = sorted.map((value) => Math.min(high, Math.max(low, value)));
  const mean = clipped.reduce((sum, value) => sum + value, 0) / clipped.length;
  const variance = clipped.reduce((sum, value) => sum + (value - mean) ** 2, 0) / clipped.length;
  if (!(variance > 0)) throw new AnalysisError('layer-constant', 'A layer has the same value everywhere in the block; leave it out.');
  const sd = Math.sqrt(variance);
  const out = new Float64Array(values.length);
  for (let cell = 0; cell < out.length; cell++) if (mask[cell] === 1) out[cell] = (Math.min(high, Math.max(low, values[cell]!)) - mean) / sd;
  return out;
}
