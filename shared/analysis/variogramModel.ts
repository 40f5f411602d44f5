/**
 * A curve through a semivariogram: nugget, partial sill and range of a spherical model, an
 * exponential one, or a smooth one (Matérn 1960 with smoothness 3/2, for ground that changes without steps).
 * Weighted least squares with the number of pairs over the squared distance as weight, which leans on the short distances
 * that kriging lives on (weights of the kind of Cressie 1985; these are common practice). For a given range, nugget and sill
 * are a linear problem; the range is searched for. In: bins. Out: the model with the smaller sum. Cost: some thousand steps.
 */
import type { VariogramBin } from './variogram.ts';

export interface VariogramModel {
  readonly shape: 'spherical' | 'exponential' | 'smooth';
  /** Variance of a reading's own error and of what varies within a step. */
  readonly nugget: number;
  readonly partialSill: number;
  /** Parameter of the curve: an exponential one has levelled off at three times this distance, a smooth one at 4.74 times. */
  readonly rangeM: number;
}

/** Semivariance at a distance; 0 at distance 0 even with a nugget. Spherical, 0.002 + 0.008, range 30: 0.003981481 at 5 m. */
export function semivariance({ nugget, partialSill, shape, rangeM }: VariogramModel, distanceM: number): number {
  return distanceM === 0 ? 0 : nugget + partialSill * rise(shape, distanceM / rangeM);
}

/** Ranges after which a curve has levelled off. */
const levelAt = { spherical: 1, exponential: 3, smooth: 4.74 } as const;

/** Distance beyond which readings tell nothing of each other. */
export function practicalRangeM({ shape, rangeM }: VariogramModel): number {
  return rangeM * levelAt[shape];
}

/** The curve that fits best; null where values do not vary or there are too few distances. */
export function fitVariogram(bins: readonly VariogramBin[], shapes: readonly VariogramModel['shape'][] = ['spherical', 'exponential', 'smooth']): VariogramModel | null {
  if (bins.length < 3 || bins.every(({ gamma }) => gamma <= 0)) return null;
  // A smooth curve without a nugget says that readings have no error, and promises far more than they can keep.
  const fits = shapes.map((shape) => bestRange(bins, shape)).filter(({ model }) => model.shape !== 'smooth' || model.nugget > 0);
  return fits.reduce((best, fit) => (fit.misfit < best.misfit ? fit : best)).model;
}

function rise(shape: VariogramModel['shape'], ranges: number): number {
  if (shape === 'exponential') return 1 - Math.exp(-ranges);
  if (shape === 'smooth') return 1 - (1 + ranges) * Math.exp(-ranges);
  return ranges >= 1 ? 1 : 1.5 * ranges - 0.5 * ranges ** 3;
}

interface Fit {
  model: VariogramModel;
  misfit: number;
}

const rangeSteps = 60;
const goldenShare = (Math.sqrt(5) - 1) / 2;

/** Curves that level off between the shortest distance and twice the longest, then a golden section around the best of them. */
function bestRange(bins: readonly VariogramBin[], shape: VariogramModel['shape']): Fit {
  const [low, high] = [bins[0]!.distanceM / levelAt[shape], (2 * bins.at(-1)!.distanceM) / levelAt[shape]];
  const rangeAt = (step: number) => low * (high / low) ** (step / rangeSteps);
  let best = 0;
  for (let step = 1; step <= rangeSteps; step++) if (fitAt(bins, shape, rangeAt(step)).misfit < fitAt(bins, shape, rangeAt(best)).misfit) best = step;
  let [from, to] = [rangeAt(Math.max(0, best - 1)), rangeAt(Math.min(rangeSteps, best + 1))];
  while (to - from > 1e-7 * high) {
    const [left, right] = [to - goldenShare * (to - from), from + goldenShare * (to - from)];
    if (fitAt(bins, shape, left).misfit < fitAt(bins, shape, right).misfit) to = right;
    else from = left;
  }
  return fitAt(bins, shape, (from + to) / 2);
}

/** Nugget and partial sill, neither below 0, that lie nearest to the bins for this range. */
function fitAt(bins: readonly VariogramBin[], shape: VariogramModel['shape'], rangeM: number): Fit {
  let [one, f, ff, g, fg] = [0, 0, 0, 0, 0];
  for (const { pairs, distanceM, gamma } of bins) {
    const weight = pairs / distanceM ** 2;
    const height = rise(shape, distanceM / rangeM);
    one += weight;
    f += weight * height;
    ff += weight * height * height;
    g += weight * gamma;
    fg += weight * height * gamma;
  }
  const determinant = one * ff - f * f;
  let [nugget, partialSill] = determinant > 1e-12 * one * ff ? [(g * ff - f * fg) / determinant, (one * fg - f * g) / determinant] : [g / one, 0];
  if (nugget < 0) [nugget, partialSill] = [0, fg / ff];
  if (partialSill < 0) [nugget, partialSill] = [g / one, 0];
  const model = { shape, nugget, partialSill, rangeM };
  const misfit = bins.reduce((sum, { pairs, distanceM, gamma }) => sum + (pairs / distanceM ** 2) * (gamma - semivariance(model, distanceM)) ** 2, 0);
  return { model, misfit };
}
