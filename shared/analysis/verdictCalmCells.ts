/**
 * Calm cells: the part of a block where the evidence layers change least from cell to cell. Zones are judged there, because
 * cells on the way from one zone to the next blur the gap between zones (after Panda & Rosenfeld 1978, who threshold
 * pictures on their low-edge pixels; from memory). Field planes in, flags out. Cost: a few passes over the plane a layer.
 */

import type { MaskedPlane } from './covariance.ts';
import { quantileOfSorted } from './quantile.ts';

/** Smoothing before slopes are taken, so that single noisy cells do not count as edges. */
export const CALM_SMOOTHING_M = 2.5;
const CALM_SHARE = 0.6;

export interface CalmOptions {
  readonly cellSizeM: number;
  readonly smoothingM?: number;
  readonly share?: number;
}

/** A finder for one mask; it is asked many times, so what depends on the mask alone is worked out once. */
export interface CalmFinder {
  /** Indexes of the calm cells of the mask, ascending: the share with the smallest slope over all layers. */
  find(layers: readonly Float64Array[]): Uint32Array;
}

export function calmFinder(plane: MaskedPlane, { cellSizeM, smoothingM = CALM_SMOOTHING_M, share = CALM_SHARE }: CalmOptions): CalmFinder {
  const smoother = maskedSmoother(plane, smoothingM / cellSizeM);
  return {
    find(layers) {
      const steepness = new Float64Array(plane.mask.length);
      for (const layer of layers) {
        const slopes = gradientSquares(plane, smoother(layer));
        for (let cell = 0; cell < slopes.length; cell++) steepness[cell] = steepness[cell]! + slopes[cell]!;
      }
      return flattest(plane.mask, steepness, share);
    },
  };
}

function flattest(mask: Uint8Array, steepness: Float64Array, share: number): Uint32Array {
  const known: number[] = [];
  let masked = 0;
  for (let cell = 0; cell < mask.length; cell++) {
    if (mask[cell] === 0) continue;
    masked++;
    if (!Number.isNaN(steepness[cell]!)) known.push(steepness[cell]!);
  }
  const sorted = Float64Array.from(known).sort();
  // A cell on the block's edge has no slope of its own and takes the middle one, which is below the limit: it is calm.
  const middle = quantileOfSorted(sorted, 0.5);
  const wanted = Math.round(share * masked);
  const limit = Math.max(middle, sorted[Math.min(sorted.length - 1, Math.max(0, wanted - (masked - sorted.length)))]!);
  const cells = new Uint32Array(masked);
  let count = 0;
  for (let cell = 0; cell < mask.length; cell++) {
    if (mask[cell] === 1 && !(steepness[cell]! > limit)) cells[count++] = cell;
  }
  return cells.slice(0, count);
}

/** Squared slope per cell width by central differences; NaN where a neighbour is outside the mask. */
export function gradientSquares({ width, height, mask }: MaskedPlane, values: ArrayLike<number>): Float64Array {
  const squares = new Float64Array(mask.length).fill(NaN);
  for (let row = 1; row < height - 1; row++) {
    for (let col = 1; col < width - 1; col++) {
      const cell = row * width + col;
      if (mask[cell]! + mask[cell - 1]! + mask[cell + 1]! + mask[cell - width]! + mask[cell + width]! < 5) continue;
      const east = (values[cell + 1]! - values[cell - 1]!) / 2;
      const south = (values[cell + width]! - values[cell - width]!) / 2;
      squares[cell] = east * east + south * south;
    }
  }
  return squares;
}

/** Gaussian mean over the mask alone (smoothed values over smoothed mask), 0 outside, as a function of the values. */
export function maskedSmoother(plane: MaskedPlane, sigmaCells: number): (values: ArrayLike<number>) => Float64Array {
  const kernel = gaussianKernel(sigmaCells);
  const twice = (values: Float64Array) => convolve(convolve(values, plane, kernel, 1), plane, kernel, plane.width);
  const weights = twice(Float64Array.from(plane.mask));
  return (values) => {
    const masked = new Float64Array(plane.mask.length);
    for (let cell = 0; cell < masked.length; cell++) if (plane.mask[cell] === 1) masked[cell] = values[cell]!;
    const sums = twice(masked);
    for (let cell = 0; cell < sums.length; cell++) sums[cell] = plane.mask[cell] === 1 ? sums[cell]! / weights[cell]! : 0;
    return sums;
  };
}

/** Half of a Gaussian kernel, from the middle to four standard deviations; [1] when that is less than half a cell. */
function gaussianKernel(sigmaCells: number): Float64Array {
  const reach = Math.floor(4 * sigmaCells + 0.5);
  const kernel = Float64Array.from({ length: reach + 1 }, (_, i) => (reach === 0 ? 1 : Math.exp(-(i * i) / (2 * sigmaCells * sigmaCells))));
  const sum = kernel.reduce((total, weight, i) => total + (i === 0 ? weight : 2 * weight), 0);
  return kernel.map((weight) => weight / sum);
}

/** One pass along rows (step 1) or columns (step = width); nothing beyond the plane. */
function convolve(values: Float64Array, { width, height }: MaskedPlane, kernel: Float64Array, step: number): Float64Array {
  const out = new Float64Array(values.length);
  const reach = kernel.length - 1;
  const length = step === 1 ? width : height;
  const lines = step === 1 ? height : width;
  for (let line = 0; line < lines; line++) {
    const base = step === 1 ? line * width : line;
    for (let at = 0; at < length; at++) {
      const cell = base + at * step;
      let sum = kernel[0]! * values[cell]!;
      if (at >= reach && at + reach < length) {
        for (let offset = 1; offset <= reach; offset++) sum += kernel[offset]! * (values[cell - offset * step]! + values[cell + offset * step]!);
      } else {
        for (let offset = 1; offset <= reach; offset++) {
          if (at >= offset) sum += kernel[offset]! * values[cell - offset * step]!;
          if (at + offset < length) sum += kernel[offset]! * values[cell + offset * step]!;
        }
      }
      out[cell] = sum;
    }
  }
  return out;
}
