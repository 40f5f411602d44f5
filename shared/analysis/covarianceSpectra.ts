/**
 * From how layers resemble themselves and each other at a distance to a recipe for random fields that do the same.
 * Per frequency a small matrix (power of each layer, shared power of each pair) and its Cholesky factor: white noise times
 * the factor, transformed, has the layers' covariances and cross-covariances. Multivariate circulant embedding (Chan & Wood
 * 1999) and phase-randomised surrogates of several series (Prichard & Theiler 1994), both from memory. Only the even part of
 * a cross-covariance is kept, so the matrices are real. Covariances are taken from the variogram. Cost: two to
 * four transforms for each layer and each pair of layers.
 */

import { choleskyFactor } from './covarianceCholesky.ts';
import { frequencyRings, withoutNegativePower } from './covarianceRings.ts';
import { makeSound } from './covarianceSound.ts';
import type { MaskedPlane } from './covariance.ts';
import type { PlaneTransform } from './covarianceFft.ts';
import { everySecond, packed, variogramSums, type VariogramSums } from './covarianceVariogram.ts';

/** Share of the cells that a lag must have as pairs for its covariance to be believed. */
const LEAST_PAIR_SHARE = 0.02;
/** Frequencies with less than this share of the mean power are left empty: they cost random numbers and show nothing. */
const NEGLIGIBLE_POWER = 1e-3;

export interface FieldRecipe {
  readonly transform: PlaneTransform;
  readonly layerCount: number;
  /** Frequencies that carry power. */
  readonly frequencies: Uint32Array;
  /** For each of them the lower triangle of the factor, row after row, scaled for the unscaled forward transform. */
  readonly factors: Float64Array;
}

/** Layers must have mean 0 over the mask and be 0 outside. */
export function fieldRecipe(plane: MaskedPlane, layers: readonly Float64Array[]): FieldRecipe {
  const sums = variogramSums(plane, layers);
  const { transform, pairs } = sums;
  const size = transform.width * transform.height;
  const covariances = layers.flatMap((a, at) => layers.slice(0, at + 1).map((b) => sumOfProducts(a, b) / pairs[0]!));
  const found = spectraOf(covariances.map((covariance, i) => taperedCovariance(sums, covariance, i)), transform);
  const spectra = layers.map((_, a) => found.slice((a * (a + 1)) / 2, (a * (a + 1)) / 2 + a + 1));
  const rings = frequencyRings(transform, Math.sqrt(pairs[0]!));
  spectra.forEach((row, a) => (row[a] = withoutNegativePower(row[a]!, rings)));
  const scales = spectra.map((row, a) => Math.sqrt((covariances[(a * (a + 3)) / 2]! * size) / Math.max(1e-300, sumOfPositive(row[a]!))));
  return factorised(transform, spectra, scales);
}

function sumOfProducts(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let cell = 0; cell < a.length; cell++) sum += a[cell]! * b[cell]!;
  return sum;
}

/** The covariance of a couple of layers at every lag, theirs in one place minus the variogram, tapered to zero at the width of the block, √cells. */
function taperedCovariance({ transform: { width, height }, pairs, halves }: VariogramSums, covariance: number, couple: number): Float64Array {
  const half = halves[couple]!;
  const cellCount = pairs[0]!;
  const reach = Math.sqrt(cellCount);
  const out = new Float64Array(width * height);
  for (let row = 0; row < height; row++) {
    const dy = row < height / 2 ? row : row - height;
    for (let col = 0; col < width; col++) {
      const dx = col < width / 2 ? col : col - width;
      const distance = Math.sqrt(dx * dx + dy * dy);
      const at = row * width + col;
      if (distance >= reach || pairs[at]! < LEAST_PAIR_SHARE * cellCount) continue;
      out[at] = (covariance - half[at]! / pairs[at]!) * 0.5 * (1 + Math.cos((Math.PI * distance) / reach));
    }
  }
  return out;
}

/** Signed spectra of covariances: a lag and its opposite have the same one, so they are real and two share a transform. */
function spectraOf(planes: readonly Float64Array[], transform: PlaneTransform): Float64Array[] {
  const found: Float64Array[] = [];
  for (let first = 0; first < planes.length; first += 2) {
    const both = transform.forward(packed(planes.slice(first, first + 2), transform));
    found.push(everySecond(both, 0), everySecond(both, 1));
  }
  return found.slice(0, planes.length);
}

function sumOfPositive(spectrum: Float64Array): number {
  let sum = 0;
  for (const value of spectrum) if (value > 0) sum += value;
  return sum;
}

/** Shared power is held to what the two layers have, negative power set to 0, and the variances restored by `scales`. */
function factorised(transform: PlaneTransform, spectra: readonly (readonly Float64Array[])[], scales: readonly number[]): FieldRecipe {
  const layerCount = scales.length;
  const size = transform.width * transform.height;
  const frequencies = audible(spectra, size);
  const triangle = (layerCount * (layerCount + 1)) / 2;
  const factors = new Float64Array(frequencies.length * triangle);
  const matrix = new Float64Array(layerCount * layerCount);
  const lower = new Float64Array(layerCount * layerCount);
  const norm = 1 / Math.sqrt(size);
  for (let at = 0, next = 0; at < frequencies.length; at++) {
    const i = frequencies[at]!;
    for (let a = 0; a < layerCount; a++) {
      for (let b = 0; b <= a; b++) {
        const most = Math.sqrt(Math.max(0, spectra[a]![a]![i]!) * Math.max(0, spectra[b]![b]![i]!));
        const value = Math.max(-most, Math.min(most, spectra[a]![b]![i]!)) * scales[a]! * scales[b]!;
        matrix[a * layerCount + b] = value;
        matrix[b * layerCount + a] = value;
      }
    }
    // Two layers are held to what they have by the line above.
    if (layerCount > 2) makeSound(matrix, layerCount);
    choleskyFactor(matrix, layerCount, lower);
    for (let a = 0; a < layerCount; a++) for (let b = 0; b <= a; b++) factors[next++] = lower[a * layerCount + b]! * norm;
  }
  return { transform, layerCount, frequencies, factors };
}

/** Frequencies at which some layer has more than a negligible share of its power. */
function audible(spectra: readonly (readonly Float64Array[])[], size: number): Uint32Array {
  const least = spectra.map((row, layer) => (NEGLIGIBLE_POWER * sumOfPositive(row[layer]!)) / size);
  const found = new Uint32Array(size);
  let count = 0;
  for (let i = 0; i < size; i++) {
    let isAudible = false;
    for (let layer = 0; layer < least.length; layer++) if (spectra[layer]![layer]![i]! > least[layer]!) isAudible = true;
    if (isAudible) found[count++] = i;
  }
  return found.slice(0, count);
}
