/**
 * Stripe guard. A sensor's swaths make a layer look alike over long distances along the swath. After a smooth surface is
 * taken off, the profile of means across the direction that explains most is compared with what other directions explain;
 * when it stands far out the layer is striped, and every swath is brought to the same mean (moment matching: Horn & Woodham
 * 1979, from memory). Cost: 36 passes over the cells of the mask.
 */

import { correlation } from './agreement.ts';
import { fittedSurface, withoutSurface } from './covarianceTrend.ts';
import type { MaskedPlane } from './covariance.ts';
import { quantileOfSorted } from './quantile.ts';
import type { AcrossProfile } from './verdictPlateaus.ts';

const DIRECTIONS = 36;
/** How many times the median direction's share the best direction must explain to count as stripes. */
export const STRIPE_RATIO = 8;

export interface StripePattern {
  /** Share of the residual variance that each of 36 directions' profile explains, every 5°, 0 = profile along x. */
  readonly shares: readonly number[];
  readonly strongest: number;
  readonly median: number;
  /** Variance left after the quadratic surface. */
  readonly residualVariance: number;
  readonly isStriped: boolean;
}

/** `stepCells` is the width of a step of the profile in cells. */
export function stripePattern(plane: MaskedPlane, values: ArrayLike<number>, stepCells: number): StripePattern {
  const cells = maskedCells(plane);
  const rest = withoutSurface(plane, values, fittedSurface(plane, values, 2));
  const residuals = Float64Array.from(cells, (cell) => rest[cell]!);
  const residualVariance = meanSquare(residuals);
  const shares = Array.from({ length: DIRECTIONS }, (_, direction) => {
    return meanSquare(levelAcross(plane, { cells, values: residuals, direction, stepCells })) / residualVariance;
  });
  const strongest = Math.max(...shares);
  const median = quantileOfSorted([...shares].sort((a, b) => a - b), 0.5);
  return { shares, strongest, median, residualVariance, isStriped: strongest >= STRIPE_RATIO * median };
}

/** The values with every step across the strongest direction brought to mean 0. */
export function withoutStripes(plane: MaskedPlane, values: ArrayLike<number>, { pattern, stepCells }: { pattern: StripePattern; stepCells: number }): Float64Array {
  const cells = maskedCells(plane);
  const chosen = Float64Array.from(cells, (cell) => values[cell]!);
  const levels = levelAcross(plane, { cells, values: chosen, direction: pattern.shares.indexOf(pattern.strongest), stepCells });
  const level = new Float64Array(plane.mask.length);
  cells.forEach((cell, i) => (level[cell] = chosen[i]! - levels[i]!));
  return level;
}

/** The means of the steps across the strongest direction, in order. */
export function strongestProfile(plane: MaskedPlane, values: ArrayLike<number>, { pattern, stepCells }: { pattern: StripePattern; stepCells: number }): AcrossProfile {
  const cells = maskedCells(plane);
  const chosen = Float64Array.from(cells, (cell) => values[cell]!);
  const { sums, counts } = stepsAcross(plane, { cells, values: chosen, direction: pattern.shares.indexOf(pattern.strongest), stepCells });
  const places = Float64Array.from(counts.keys()).filter((step) => counts[step]! > 0);
  return { places, means: places.map((step) => sums[step]! / counts[step]!), counts: places.map((step) => counts[step]!) };
}

/** Correlation between the two halves of a block's stripes that shows that they run through (judgement). */
const LEAST_LIKENESS = 0.3;
/** Steps shorter than this share of the longest say little: a corner fills those at the end of its diagonal. */
const LEAST_LENGTH = 0.5;

/** Whether both halves of each step across the strongest direction show the same profile: ground that stands out lies in one only. */
export function runThrough(plane: MaskedPlane, values: ArrayLike<number>, { pattern, stepCells }: { pattern: StripePattern; stepCells: number }): boolean {
  const cells = maskedCells(plane);
  const direction = pattern.shares.indexOf(pattern.strongest);
  // A quarter turn on, places across are places along.
  const along = placesAcross(plane, cells, direction + DIRECTIONS / 2);
  const { sums, counts, steps } = stepsAcross(plane, { cells, values: along, direction, stepCells });
  const longest = counts.reduce((most, count) => Math.max(most, count), 0);
  const totals = [new Float64Array(counts.length), new Float64Array(counts.length)] as const;
  const halves = [new Float64Array(counts.length), new Float64Array(counts.length)] as const;
  for (let i = 0; i < cells.length; i++) {
    const step = steps[i]!;
    const half = along[i]! * counts[step]! < sums[step]! ? 0 : 1;
    totals[half][step] = totals[half][step]! + values[cells[i]!]!;
    halves[half][step] = halves[half][step]! + 1;
  }
  const long = [...counts.keys()].filter((step) => counts[step]! >= LEAST_LENGTH * longest && halves[0][step]! > 0 && halves[1][step]! > 0);
  const profile = (half: 0 | 1) => Float64Array.from(long, (step) => totals[half][step]! / halves[half][step]!);
  return correlation(profile(0), profile(1)) >= LEAST_LIKENESS;
}

function maskedCells({ mask }: MaskedPlane): Uint32Array {
  const cells: number[] = [];
  for (let cell = 0; cell < mask.length; cell++) if (mask[cell] === 1) cells.push(cell);
  return Uint32Array.from(cells);
}

function meanSquare(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value * value;
  return sum / values.length;
}

interface ProfileInput {
  readonly cells: Uint32Array;
  readonly values: Float64Array;
  readonly direction: number;
  readonly stepCells: number;
}

/** For each cell the mean of its step across the direction. */
function levelAcross(plane: MaskedPlane, input: ProfileInput): Float64Array {
  const { sums, counts, steps } = stepsAcross(plane, input);
  const levels = new Float64Array(steps.length);
  for (let i = 0; i < levels.length; i++) levels[i] = sums[steps[i]!]! / counts[steps[i]!]!;
  return levels;
}

/** Places of the cells across a direction, in cells from the corner of the plane. */
function placesAcross({ width }: MaskedPlane, cells: Uint32Array, direction: number): Float64Array {
  const angle = (direction * Math.PI) / DIRECTIONS;
  return Float64Array.from(cells, (cell) => (cell % width) * Math.cos(angle) + Math.floor(cell / width) * Math.sin(angle));
}

/** Sum and number of cells of each step across the direction, and the step of each cell; steps are counted from the outermost cell. */
function stepsAcross({ width }: MaskedPlane, { cells, values, direction, stepCells }: ProfileInput): { sums: Float64Array; counts: Float64Array; steps: Uint32Array } {
  const angle = (direction * Math.PI) / DIRECTIONS;
  const cosine = Math.cos(angle) / stepCells;
  const sine = Math.sin(angle) / stepCells;
  const positions = new Float64Array(cells.length);
  let first = Infinity;
  let last = -Infinity;
  for (let i = 0; i < cells.length; i++) {
    const row = Math.floor(cells[i]! / width);
    const position = (cells[i]! - row * width) * cosine + row * sine;
    positions[i] = position;
    if (position < first) first = position;
    if (position > last) last = position;
  }
  const sums = new Float64Array(Math.floor(last - first) + 2);
  const counts = new Float64Array(sums.length);
  const steps = new Uint32Array(cells.length);
  for (let i = 0; i < cells.length; i++) {
    const step = Math.floor(positions[i]! - first);
    steps[i] = step;
    sums[step] = sums[step]! + values[i]!;
    counts[step] = counts[step]! + 1;
  }
  return { sums, counts, steps };
}
