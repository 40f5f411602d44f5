/**
 * How a layer resembles itself at a distance: masked autocovariance by Fourier transform.
 * In: values on the cells of a plane and a mask; cells outside the mask do not count. Out: for every lag (dx, dy) the sum
 * of products and the number of pairs; their ratio is the covariance C(dx, dy). Zero padding to twice the size keeps the
 * ends of the block apart; the mask is treated the same way, so irregular outlines are exact (Marcotte 1996, from memory).
 * Cost: two transforms of the padded plane.
 */

import { createPlaneTransform, powerOfTwoAtLeast, type PlaneTransform } from './covarianceFft.ts';

/** Cells in rows from the north-west corner; `mask` is 1 where a cell counts. */
export interface MaskedPlane {
  readonly width: number;
  readonly height: number;
  readonly mask: Uint8Array;
}

export interface LagSums {
  readonly transform: PlaneTransform;
  /** Sum of products and number of pairs at lag (dx, dy), at index lagIndex; negative lags wrap around. */
  readonly products: Float64Array;
  readonly pairs: Float64Array;
}

export function lagIndex({ width, height }: { width: number; height: number }, dx: number, dy: number): number {
  return ((dy + height) % height) * width + ((dx + width) % width);
}

/**
 * Autocovariance sums of `values` (mean already taken off) over the mask.
 * On 4 × 4 cells with columns 1 1 −1 −1 the sums at dx = 0…3, dy = 0 are 16 4 −8 −4 over 16 12 8 4 pairs.
 */
export function lagSums(plane: MaskedPlane, values: ArrayLike<number>): LagSums {
  const transform = createPlaneTransform(powerOfTwoAtLeast(2 * plane.width), powerOfTwoAtLeast(2 * plane.height));
  const spectrum = transform.forward(packed(plane, values, transform));
  const power = powerOf(spectrum, transform);
  const lags = transform.inverse(power);
  const size = transform.width * transform.height;
  const products = new Float64Array(size);
  const pairs = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    products[i] = lags[2 * i]!;
    pairs[i] = Math.round(lags[2 * i + 1]!);
  }
  return { transform, products, pairs };
}

/** The masked values as real part and the mask as imaginary part of the padded plane. */
function packed({ width, height, mask }: MaskedPlane, values: ArrayLike<number>, transform: PlaneTransform): Float64Array {
  const plane = new Float64Array(2 * transform.width * transform.height);
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const cell = row * width + col;
      if (mask[cell] === 0) continue;
      const at = 2 * (row * transform.width + col);
      plane[at] = values[cell]!;
      plane[at + 1] = 1;
    }
  }
  return plane;
}

/**
 * From the transform F of a + ib (a, b real) by A = (F(k) + F̄(−k))/2, B = (F(k) − F̄(−k))/2i: the plane |A|² + i|B|², whose inverse
 * transform holds the lag sums of a as real part and those of b as imaginary part.
 */
function powerOf(spectrum: Float64Array, { width, height }: PlaneTransform): Float64Array {
  const power = new Float64Array(spectrum.length);
  for (let row = 0; row < height; row++) {
    const mirrorRow = (height - row) % height;
    for (let col = 0; col < width; col++) {
      const at = 2 * (row * width + col);
      const mirror = 2 * (mirrorRow * width + ((width - col) % width));
      const realA = (spectrum[at]! + spectrum[mirror]!) / 2;
      const imaginaryA = (spectrum[at + 1]! - spectrum[mirror + 1]!) / 2;
      const realB = (spectrum[at + 1]! + spectrum[mirror + 1]!) / 2;
      const imaginaryB = (spectrum[mirror]! - spectrum[at]!) / 2;
      power[at] = realA * realA + imaginaryA * imaginaryA;
      power[at + 1] = realB * realB + imaginaryB * imaginaryB;
    }
  }
  return power;
}

export interface SectorCorrelations {
  /** Correlation at about the given distance in six sectors of 30°, from south over east to north; NaN without pairs. */
  readonly correlations: readonly number[];
  readonly pairs: readonly number[];
}

const SECTORS = 6;

/**
 * Correlation of a layer with itself between 0.8 and 1.2 × `distanceCells`, per direction. `variance` is that of the
 * values over the mask. Each pair of cells counts once (half plane of lags).
 */
export function sectorCorrelations(sums: LagSums, distanceCells: number, variance: number): SectorCorrelations {
  const products = new Array<number>(SECTORS).fill(0);
  const pairs = new Array<number>(SECTORS).fill(0);
  const reach = Math.floor(1.2 * distanceCells);
  const { width, height } = sums.transform;
  for (let dx = 0; dx <= Math.min(reach, width / 2 - 1); dx++) {
    for (let dy = -Math.min(reach, height / 2 - 1); dy <= Math.min(reach, height / 2 - 1); dy++) {
      if (dx === 0 && dy <= 0) continue;
      const length = Math.hypot(dx, dy);
      if (length < 0.8 * distanceCells || length > 1.2 * distanceCells) continue;
      const sector = Math.floor(((Math.atan2(dy, dx) + Math.PI / 2) / Math.PI) * SECTORS) % SECTORS;
      const at = lagIndex(sums.transform, dx, dy);
      products[sector] = products[sector]! + sums.products[at]!;
      pairs[sector] = pairs[sector]! + sums.pairs[at]!;
    }
  }
  return { correlations: products.map((sum, sector) => sum / pairs[sector]! / variance), pairs };
}

/**
 * The second lowest of the sector correlations: high only when a layer resembles itself in nearly every direction, so
 * that a sensor's stripes, alike along the stripe only, do not pass. One odd direction is forgiven.
 */
export function secondLowest({ correlations }: SectorCorrelations): number {
  const known = correlations.filter((value) => !Number.isNaN(value)).sort((a, b) => a - b);
  return known[1] ?? known[0] ?? 0;
}
