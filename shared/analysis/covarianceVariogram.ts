/**
 * How much layers differ at a distance, singly and together: for every lag half the sum over its pairs of cells of
 * (a − a′)(b − b′), which over the number of pairs is the variogram (a = b; Matheron 1963) or the cross-variogram, by Fourier
 * transform like sums of products (Marcotte 1996; all from memory). They know no mean, and high values on an edge, which has
 * fewer pairs at longer lags, do not pass for roughness, as they do in products.
 * In: layers, 0 outside the mask. Cost: sequences are real and so are the transforms of lag sums, so that two share a
 * transform: three layers need ten, one needs three.
 */

import { createPlaneTransform, powerOfTwoAtLeast, type PlaneTransform } from './covarianceFft.ts';
import type { MaskedPlane } from './covariance.ts';

export interface VariogramSums {
  readonly transform: PlaneTransform;
  /** Number of pairs at lag (dx, dy), at index lagIndex; negative lags wrap around. */
  readonly pairs: Float64Array;
  /** Half sums of products of differences of layers a and b ≤ a, the lower triangle row after row. */
  readonly halves: readonly Float64Array[];
}

/** Two columns 1 and −1 of two cells: 4 at dx = 1 over 2 pairs. */
export function variogramSums(plane: MaskedPlane, layers: readonly Float64Array[]): VariogramSums {
  const transform = createPlaneTransform(powerOfTwoAtLeast(2 * plane.width), powerOfTwoAtLeast(2 * plane.height));
  const spectra = spectraOf([plane.mask, ...layers], plane, transform);
  const couples = [null, ...layers.flatMap((_, a) => layers.slice(0, a + 1).map((__, b) => [a, b] as const))];
  const sums: Float64Array[] = [];
  for (let first = 0; first < couples.length; first += 2) {
    const two = couples.slice(first, first + 2);
    const products = spectraOf(two.flatMap((couple) => (couple === null ? [] : [productOf(layers[couple[0]]!, layers[couple[1]]!)])), plane, transform);
    const powers = two.map((couple) => (couple === null ? powerOf(spectra[0]!) : differencePower({ product: products.shift()!, mask: spectra[0]!, a: spectra[1 + couple[0]]!, b: spectra[1 + couple[1]]! })));
    const lags = transform.inverse(packed(powers, transform));
    two.forEach((_, part) => sums.push(everySecond(lags, part)));
  }
  const [pairs, ...halves] = sums;
  return { transform, pairs: pairs!.map(Math.round), halves };
}

/** A complex spectrum of a real sequence. */
interface Spectrum {
  readonly real: Float64Array;
  readonly imaginary: Float64Array;
}

/** Spectra of sequences on the cells of the plane, two by one transform: F of p + iq has P = (F(k) + F̄(−k))/2, Q = (F(k) − F̄(−k))/2i. */
function spectraOf(sequences: readonly ArrayLike<number>[], plane: MaskedPlane, transform: PlaneTransform): Spectrum[] {
  const { width, height } = transform;
  const found: Spectrum[] = [];
  for (let first = 0; first < sequences.length; first += 2) {
    const both = transform.forward(padded(sequences[first]!, sequences[first + 1], { plane, transform }));
    const [p, q] = [emptySpectrum(width * height), emptySpectrum(width * height)];
    for (let row = 0; row < height; row++) separate(both, { p, q }, { width, row, mirrorRow: (height - row) % height });
    found.push(p, q);
  }
  return found.slice(0, sequences.length);
}

function emptySpectrum(size: number): Spectrum {
  return { real: new Float64Array(size), imaginary: new Float64Array(size) };
}

function separate(both: Float64Array, { p, q }: { p: Spectrum; q: Spectrum }, { width, row, mirrorRow }: { width: number; row: number; mirrorRow: number }): void {
  for (let col = 0; col < width; col++) {
    const to = row * width + col;
    const mirror = 2 * (mirrorRow * width + (col === 0 ? 0 : width - col));
    const [real, imaginary] = [both[2 * to]!, both[2 * to + 1]!];
    p.real[to] = (real + both[mirror]!) / 2;
    p.imaginary[to] = (imaginary - both[mirror + 1]!) / 2;
    q.real[to] = (imaginary + both[mirror + 1]!) / 2;
    q.imaginary[to] = (both[mirror]! - real) / 2;
  }
}

/** One sequence as real part of the padded plane, another, if any, as imaginary part. */
function padded(one: ArrayLike<number>, other: ArrayLike<number> | undefined, { plane: { width, height, mask }, transform }: { plane: MaskedPlane; transform: PlaneTransform }): Float64Array {
  const out = new Float64Array(2 * transform.width * transform.height);
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const cell = row * width + col;
      if (mask[cell] === 0) continue;
      const at = 2 * (row * transform.width + col);
      out[at] = one[cell]!;
      if (other !== undefined) out[at + 1] = other[cell]!;
    }
  }
  return out;
}

function productOf(a: Float64Array, b: Float64Array): Float64Array {
  const product = new Float64Array(a.length);
  for (let i = 0; i < product.length; i++) product[i] = a[i]! * b[i]!;
  return product;
}

function powerOf({ real, imaginary }: Spectrum): Float64Array {
  const power = new Float64Array(real.length);
  for (let i = 0; i < power.length; i++) power[i] = real[i]! * real[i]! + imaginary[i]! * imaginary[i]!;
  return power;
}

/** Products that lie in the mask at either end, less products over the lag: the mean of lag and opposite lag is the real part. */
function differencePower({ product, mask, a, b }: { product: Spectrum; mask: Spectrum; a: Spectrum; b: Spectrum }): Float64Array {
  const power = new Float64Array(mask.real.length);
  for (let i = 0; i < power.length; i++) {
    power[i] = product.real[i]! * mask.real[i]! + product.imaginary[i]! * mask.imaginary[i]! - a.real[i]! * b.real[i]! - a.imaginary[i]! * b.imaginary[i]!;
  }
  return power;
}

/** Up to two real planes as one complex plane. */
export function packed([one, other]: readonly Float64Array[], { width, height }: PlaneTransform): Float64Array {
  const out = new Float64Array(2 * width * height);
  for (let i = 0; i < one!.length; i++) out[2 * i] = one![i]!;
  if (other !== undefined) for (let i = 0; i < other.length; i++) out[2 * i + 1] = other[i]!;
  return out;
}

/** The real parts (0) or the imaginary parts (1) of a complex plane. */
export function everySecond(plane: Float64Array, part: number): Float64Array {
  const out = new Float64Array(plane.length / 2);
  for (let i = 0; i < out.length; i++) out[i] = plane[2 * i + part]!;
  return out;
}
