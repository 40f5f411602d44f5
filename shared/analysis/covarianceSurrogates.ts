/**
 * Random fields that vary as smoothly as the given layers but hold no zones: the comparison against which zones must prove
 * themselves. Each layer is taken apart into a tilted plane and the rest (the drift and residual of universal kriging,
 * Matheron 1969, from memory); the plane is kept, because a slope is no zone, and the rest is replaced by Gaussian fields
 * with the same covariances within and between layers. Gaussian on purpose: keeping a layer's own histogram would keep the
 * very plateaus under test. Surrogate-data testing: Theiler et al. 1992 (from memory).
 */

import { fieldRecipe, type FieldRecipe } from './covarianceSpectra.ts';
import { fittedSurface, withoutSurface } from './covarianceTrend.ts';
import type { MaskedPlane } from './covariance.ts';
import type { Random } from './random.ts';

export interface SurrogateModel {
  readonly plane: MaskedPlane;
  /** Tilted plane of each layer, at every cell. */
  readonly drifts: readonly Float64Array[];
  readonly recipe: FieldRecipe;
}

/** Layers are 0 outside the mask. */
export function surrogateModel(plane: MaskedPlane, layers: readonly Float64Array[]): SurrogateModel {
  const drifts = layers.map((layer) => fittedSurface(plane, layer, 1));
  return { plane, drifts, recipe: fieldRecipe(plane, layers.map((layer, l) => withoutSurface(plane, layer, drifts[l]!))) };
}

/**
 * `count` surrogates; each is one array of width × height values a layer, also outside the mask. Real and imaginary part of
 * one filtered complex noise are two independent fields, so a pair of surrogates costs one transform a layer.
 */
export function* surrogateFields(model: SurrogateModel, count: number, random: Random): Generator<Float64Array[]> {
  const { recipe } = model;
  const planes = model.drifts.map(() => new Float64Array(2 * recipe.transform.width * recipe.transform.height));
  const field = new Float64Array(planes[0]!.length);
  for (let made = 0; made < count; made += 2) {
    drawNoise(recipe, planes, random);
    const pair: [Float64Array[], Float64Array[]] = [[], []];
    planes.forEach((plane, layer) => {
      recipe.transform.forward(plane, field);
      pair[0].push(cropped(model, layer, { field, part: 0 }));
      pair[1].push(cropped(model, layer, { field, part: 1 }));
    });
    yield pair[0];
    if (made + 1 < count) yield pair[1];
  }
}

/** Complex noise at the frequencies that carry power, mixed between layers; the rest of the planes stays 0. */
function drawNoise({ frequencies, factors, layerCount }: FieldRecipe, planes: readonly Float64Array[], random: Random): void {
  const noise = new Float64Array(2 * layerCount);
  for (let i = 0, factor = 0; i < frequencies.length; i++) {
    const at = 2 * frequencies[i]!;
    fillNormal(noise, random);
    for (let layer = 0; layer < layerCount; layer++) {
      let real = 0;
      let imaginary = 0;
      for (let other = 0; other <= layer; other++, factor++) {
        real += factors[factor]! * noise[2 * other]!;
        imaginary += factors[factor]! * noise[2 * other + 1]!;
      }
      planes[layer]![at] = real;
      planes[layer]![at + 1] = imaginary;
    }
  }
}

/** Standard normal deviates in pairs by the polar method (Marsaglia & Bray 1964); the length is even. */
function fillNormal(out: Float64Array, random: Random): void {
  for (let at = 0; at < out.length; ) {
    const u = 2 * random() - 1;
    const v = 2 * random() - 1;
    const q = u * u + v * v;
    if (q >= 1 || q === 0) continue;
    const stretch = Math.sqrt((-2 * Math.log(q)) / q);
    out[at++] = u * stretch;
    out[at++] = v * stretch;
  }
}

function cropped({ plane: { width, height }, recipe, drifts }: SurrogateModel, layer: number, from: { field: Float64Array; part: 0 | 1 }): Float64Array {
  const out = new Float64Array(width * height);
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const cell = row * width + col;
      out[cell] = drifts[layer]![cell]! + from.field[2 * (row * recipe.transform.width + col) + from.part]!;
    }
  }
  return out;
}
