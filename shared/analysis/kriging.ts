/**
 * Ordinary kriging: the value at a place as the weighted mean of readings around it, with the weights that err least on
 * average under a model of how readings resemble each other (Matheron 1963; Isaaks & Srivastava 1989).
 * The nugget counts as error of the reading: the estimate is of the ground, and at the place of a reading it need not equal it.
 * In: some twenty points and a model. Out: value and variance anywhere near. Cost: one factorisation, then a sum a place.
 */
import { semivariance, type VariogramModel } from './variogramModel.ts';
import type { ValuedPoints } from './resamplePoints.ts';

export interface KrigingSystem {
  /** Estimate at a place. */
  readonly valueAt: (x: number, y: number) => number;
  readonly detailAt: (x: number, y: number) => KrigingDetail;
}

export interface KrigingDetail {
  readonly value: number;
  /** Expected squared difference from a new reading there. */
  readonly variance: number;
  /** One a point; they add up to 1. */
  readonly weights: Float64Array;
  readonly multiplier: number;
}

/**
 * Points (0,0) 0.50, (10,0) 0.62, (0,10) 0.55, (15,12) 0.70 under a spherical model 0.002 + 0.008 of range 30 give 0.578727 at
 * (5,5) with variance 0.005098.
 */
export function krigingSystem({ x, y, value }: ValuedPoints, model: VariogramModel): KrigingSystem {
  const count = x.length;
  const sill = model.nugget + model.partialSill;
  const factor = factorOf({ x, y }, model);
  const ones = solve(factor, new Float64Array(count).fill(1));
  const valued = solve(factor, value);
  const total = ones.reduce((sum, each) => sum + each, 0);
  const valuedTotal = valued.reduce((sum, each) => sum + each, 0);
  // Semivariance without the nugget: a place is compared with the ground under a reading.
  const ground = { ...model, nugget: 0 };
  const likeness = (point: number, east: number, north: number) => model.partialSill - semivariance(ground, distance(x[point]! - east, y[point]! - north));
  return {
    valueAt(east, north) {
      let [sum, share] = [0, 0];
      for (let point = 0; point < count; point++) {
        const alike = likeness(point, east, north);
        sum += alike * valued[point]!;
        share += alike * ones[point]!;
      }
      return sum + ((1 - share) / total) * valuedTotal;
    },
    detailAt(east, north) {
      const alike = Float64Array.from(x, (_, point) => likeness(point, east, north));
      const solved = solve(factor, alike);
      const multiplier = (solved.reduce((sum, each) => sum + each, 0) - 1) / total;
      const weights = solved.map((each, point) => each - multiplier * ones[point]!);
      const explained = weights.reduce((sum, weight, point) => sum + weight * alike[point]!, 0);
      return { value: weights.reduce((sum, weight, point) => sum + weight * value[point]!, 0), variance: sill - explained - multiplier, weights, multiplier };
    },
  };
}

/** Lower triangle of Cholesky, row by row. A trace of the sill on the diagonal keeps readings on one spot apart. */
function factorOf({ x, y }: Pick<ValuedPoints, 'x' | 'y'>, model: VariogramModel): Float64Array {
  const count = x.length;
  const sill = model.nugget + model.partialSill;
  const lower = new Float64Array(count * count);
  for (let row = 0; row < count; row++) {
    for (let col = 0; col <= row; col++) {
      const distanceM = distance(x[row]! - x[col]!, y[row]! - y[col]!);
      let sum = row === col ? sill * (1 + 1e-10) : distanceM === 0 ? model.partialSill : sill - semivariance(model, distanceM);
      for (let at = 0; at < col; at++) sum -= lower[row * count + at]! * lower[col * count + at]!;
      lower[row * count + col] = row === col ? Math.sqrt(Math.max(sum, 1e-12 * sill)) : sum / lower[col * count + col]!;
    }
  }
  return lower;
}

function solve(lower: Float64Array, right: Float64Array): Float64Array {
  const count = right.length;
  const out = Float64Array.from(right);
  for (let row = 0; row < count; row++) {
    for (let at = 0; at < row; at++) out[row]! -= lower[row * count + at]! * out[at]!;
    out[row]! /= lower[row * count + row]!;
  }
  for (let row = count - 1; row >= 0; row--) {
    for (let at = row + 1; at < count; at++) out[row]! -= lower[at * count + row]! * out[at]!;
    out[row]! /= lower[row * count + row]!;
  }
  return out;
}

/** Ten times as fast as Math.hypot; metres do not overflow. */
function distance(east: number, north: number): number {
  return Math.sqrt(east * east + north * north);
}
