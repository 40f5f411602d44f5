/** Random fields on a grid, for blocks made up to measure the zoning on. Nothing here describes a real place. */

import { createPlaneTransform, powerOfTwoAtLeast } from '../../shared/analysis/covarianceFft.ts';
import type { Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, type Random } from '../../shared/analysis/random.ts';

export function whiteField(grid: Grid, random: Random): Float64Array {
  return Float64Array.from({ length: grid.cols * grid.rows }, () => randomNormal(random));
}

/** Gaussian field with a Gaussian covariance: white noise filtered so that two places `lengthM` apart correlate by exp(−1). */
export function smoothField(grid: Grid, lengthM: number, random: Random): Float64Array {
  const sigmaCells = lengthM / grid.cellSizeM / 2;
  const margin = Math.ceil(6 * sigmaCells);
  const transform = createPlaneTransform(powerOfTwoAtLeast(grid.cols + margin), powerOfTwoAtLeast(grid.rows + margin));
  const { width, height } = transform;
  const plane = new Float64Array(2 * width * height);
  for (let i = 0; i < width * height; i++) plane[2 * i] = randomNormal(random);
  const spectrum = transform.forward(plane);
  for (let row = 0; row < height; row++) {
    const v = Math.min(row, height - row) / height;
    for (let col = 0; col < width; col++) {
      const u = Math.min(col, width - col) / width;
      const gain = Math.exp(-2 * (Math.PI * sigmaCells) ** 2 * (u * u + v * v));
      spectrum[2 * (row * width + col)]! *= gain;
      spectrum[2 * (row * width + col) + 1]! *= gain;
    }
  }
  const field = transform.inverse(spectrum);
  return standardisedInside(grid, Float64Array.from({ length: grid.cols * grid.rows }, (_, cell) => field[2 * (Math.floor(cell / grid.cols) * width + (cell % grid.cols))]!));
}

/** A plane tilted in a random direction. */
export function planeField(grid: Grid, random: Random): Float64Array {
  const angle = 2 * Math.PI * random();
  const at = (cell: number) => (cell % grid.cols) * Math.cos(angle) + Math.floor(cell / grid.cols) * Math.sin(angle);
  return standardisedInside(grid, Float64Array.from({ length: grid.cols * grid.rows }, (_, cell) => at(cell)));
}

/** Swaths of one width in a random direction, each with its own level of standard deviation 1. */
export function stripeField(grid: Grid, widthM: number, random: Random): Float64Array {
  const angle = Math.PI * random();
  const levels = Array.from({ length: 4096 }, () => randomNormal(random));
  const at = (cell: number) => ((cell % grid.cols) * Math.cos(angle) + Math.floor(cell / grid.cols) * Math.sin(angle)) * grid.cellSizeM;
  return Float64Array.from({ length: grid.cols * grid.rows }, (_, cell) => levels[2048 + Math.floor(at(cell) / widthM)]!);
}

/** Mean 0 and standard deviation 1 over the cells inside. */
export function standardisedInside(grid: Grid, field: Float64Array): Float64Array {
  const inside = field.filter((_, cell) => grid.inside[cell] === 1);
  const mean = inside.reduce((sum, value) => sum + value, 0) / inside.length;
  const sd = Math.sqrt(inside.reduce((sum, value) => sum + (value - mean) ** 2, 0) / inside.length);
  return field.map((value) => (value - mean) / sd);
}

/** a + weight × b, cell by cell. */
export function added(a: Float64Array, b: Float64Array, weight: number): Float64Array {
  return a.map((value, cell) => value + weight * b[cell]!);
}
