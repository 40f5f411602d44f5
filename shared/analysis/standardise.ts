/**
 * Layers on one scale before clustering. In: cells of a layer. Out: cells with centre 0 and spread 1; NaN outside the
 * block and where missing. Extremes are first drawn in to the 0.5 and 99.5 percentiles, so that one bright roof or bare
 * patch does not set the scale. Cost: linear in the cells.
 */
import { assertCellCount, valuesInside, type Cells, type Grid } from './grid.ts';
import { quantilesOf } from './quantile.ts';

export type StandardMethod = 'plain' | 'robust';

export interface StandardiseOptions {
  /** plain: mean and population standard deviation. robust: median and 1.4826 × median absolute deviation (Hampel 1974). */
  readonly method?: StandardMethod;
  /** Shares of the values beyond which they are drawn in; [0, 1] draws nothing in. */
  readonly clip?: readonly [low: number, high: number];
}

export interface StandardisedLayer {
  readonly cells: Cells;
  /** In the layer's own unit: value = centre + scale × standardised, except where drawn in. */
  readonly centre: number;
  /** 0 when all values are equal: the layer tells nothing, and all its standardised values are 0. */
  readonly scale: number;
  /** Limits the values were drawn in to. */
  readonly low: number;
  readonly high: number;
}

type CentreAndScale = (clipped: Float32Array) => readonly [centre: number, scale: number];

const METHODS: Record<StandardMethod, CentreAndScale> = { plain: meanAndSd, robust: medianAndMad };

/** Four cells 1, 2, 3, 4 without drawing in give -1.342, -0.447, 0.447, 1.342 (mean 2.5, population sd 1.118). */
export function standardise(grid: Grid, cells: Cells, { method = 'plain', clip = [0.005, 0.995] }: StandardiseOptions = {}): StandardisedLayer {
  assertCellCount(grid, cells, 'The layer');
  const given = valuesInside(grid, cells);
  const [low = NaN, high = NaN] = quantilesOf(given, clip);
  drawIn(given, low, high);
  const [centre, scale] = given.length === 0 ? [NaN, 0] : METHODS[method](given);
  return { cells: onScale(grid, cells, { centre, scale, low, high }), centre, scale, low, high };
}

function drawIn(values: Float32Array, low: number, high: number): void {
  for (let at = 0; at < values.length; at++) values[at] = Math.min(high, Math.max(low, values[at]!));
}

function onScale({ inside }: Grid, cells: Cells, { centre, scale, low, high }: Omit<StandardisedLayer, 'cells'>): Cells {
  const out = new Float32Array(cells.length).fill(NaN);
  for (let cell = 0; cell < cells.length; cell++) {
    const value = cells[cell]!;
    if (inside[cell] !== 1 || Number.isNaN(value)) continue;
    out[cell] = scale > 0 ? (Math.min(high, Math.max(low, value)) - centre) / scale : 0;
  }
  return out;
}

function meanAndSd(values: Float32Array): readonly [number, number] {
  // Sums around the first value keep the digits of a layer far from 0, such as elevation.
  const origin = values[0]!;
  let sum = 0;
  let squares = 0;
  for (let at = 0; at < values.length; at++) {
    const above = values[at]! - origin;
    sum += above;
    squares += above * above;
  }
  const mean = sum / values.length;
  return [origin + mean, Math.sqrt(Math.max(0, squares / values.length - mean * mean))];
}

/** When more than half of the values are equal the deviation is 0, and the plain standard deviation takes its place. */
function medianAndMad(values: Float32Array): readonly [number, number] {
  const [median = NaN] = quantilesOf(values, [0.5]);
  const [middle = NaN] = quantilesOf(values.map((value) => Math.abs(value - median)), [0.5]);
  const deviation = 1.4826 * middle;
  return [median, deviation > 0 ? deviation : meanAndSd(values)[1]];
}
