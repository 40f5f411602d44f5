/**
 * Least-squares surface through the cells of a plane: a tilted plane (order 1) or with squares (order 2).
 * Positions run from −1 to 1 so that the squares stay of the size of the rest. Cost: two passes over the cells.
 */

import { solveSymmetric } from './covarianceCholesky.ts';
import type { MaskedPlane } from './covariance.ts';

/** Surface value at every cell of the plane, also outside the mask. */
export function fittedSurface(plane: MaskedPlane, values: ArrayLike<number>, order: 1 | 2): Float64Array {
  const terms = order === 1 ? 3 : 6;
  const normal = new Float64Array(terms * terms);
  const right = new Float64Array(terms);
  const basis = new Float64Array(terms);
  for (let cell = 0; cell < plane.mask.length; cell++) {
    if (plane.mask[cell] === 0) continue;
    surfaceTerms(plane, cell, basis);
    for (let a = 0; a < terms; a++) {
      right[a] = right[a]! + basis[a]! * values[cell]!;
      for (let b = 0; b < terms; b++) normal[a * terms + b] = normal[a * terms + b]! + basis[a]! * basis[b]!;
    }
  }
  const coefficients = solveSymmetric(normal, right);
  const surface = new Float64Array(plane.mask.length);
  for (let cell = 0; cell < surface.length; cell++) {
    surfaceTerms(plane, cell, basis);
    for (let a = 0; a < terms; a++) surface[cell] = surface[cell]! + basis[a]! * coefficients[a]!;
  }
  return surface;
}

/** The values minus their surface on the mask, 0 elsewhere. */
export function withoutSurface(plane: MaskedPlane, values: ArrayLike<number>, surface: Float64Array): Float64Array {
  return surface.map((height, cell) => (plane.mask[cell] === 1 ? values[cell]! - height : 0));
}

/** 1, x, y and, when there is room, x², xy, y². */
function surfaceTerms({ width, height }: MaskedPlane, cell: number, basis: Float64Array): void {
  const row = Math.floor(cell / width);
  const x = (2 * (cell - row * width + 0.5)) / width - 1;
  const y = (2 * (row + 0.5)) / height - 1;
  basis[0] = 1;
  basis[1] = x;
  basis[2] = y;
  if (basis.length === 3) return;
  basis[3] = x * x;
  basis[4] = x * y;
  basis[5] = y * y;
}
