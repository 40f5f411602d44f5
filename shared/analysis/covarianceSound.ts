/**
 * Powers and shared powers of several layers at one frequency, estimated pair by pair, need not fit together: a third layer can be
 * said to move with two others that move against each other. No field has such covariances, and a Cholesky factor of them is
 * beyond all bounds. Negative eigenvalues of the coherences are set to 0, as circulant embedding does (Wood & Chan 1994), and the
 * powers restored (the eigenvalue method of Rousseeuw & Molenberghs 1993); both from memory.
 */

import { eigenOf } from './eigen.ts';

/** Keeps the factor's pivots above what rounding leaves. */
const LEAST_EIGENVALUE = 1e-9;

/** Writes the sound matrix in place of a symmetric one with powers on its diagonal; the powers stay, and a sound matrix stays as it is. */
export function makeSound(matrix: Float64Array, size: number): void {
  const roots = Array.from({ length: size }, (_, a) => Math.sqrt(matrix[a * size + a]!));
  const coherence = matrix.map((value, at) => coherenceOf(value, { at, size, roots }));
  const { vectors, values } = eigenOf(coherence, size);
  if (values.at(-1)! >= 0) return;
  const held = (a: number, b: number) => values.reduce((sum, value, e) => sum + Math.max(LEAST_EIGENVALUE, value) * vectors[e]![a]! * vectors[e]![b]!, 0);
  const lengths = roots.map((_, a) => Math.sqrt(held(a, a)));
  for (let a = 0; a < size; a++) {
    for (let b = 0; b < a; b++) {
      const shared = (held(a, b) / (lengths[a]! * lengths[b]!)) * roots[a]! * roots[b]!;
      matrix[a * size + b] = shared;
      matrix[b * size + a] = shared;
    }
  }
}

/** A layer without power at the frequency moves with no other. */
function coherenceOf(value: number, { at, size, roots }: { at: number; size: number; roots: readonly number[] }): number {
  const [a, b] = [Math.floor(at / size), at % size];
  if (a === b) return 1;
  const power = roots[a]! * roots[b]!;
  return power > 0 ? value / power : 0;
}
