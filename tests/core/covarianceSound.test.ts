import { describe, expect, it } from 'vitest';
import { choleskyFactor } from '../../shared/analysis/covarianceCholesky.ts';
import { makeSound } from '../../shared/analysis/covarianceSound.ts';
import { surrogateFields, surrogateModel } from '../../shared/analysis/covarianceSurrogates.ts';
import { eigenOf } from '../../shared/analysis/eigen.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

const symmetric = (powers: readonly number[], coherence: (a: number, b: number) => number) =>
  Float64Array.from({ length: powers.length ** 2 }, (_, at) => {
    const [a, b] = [Math.floor(at / powers.length), at % powers.length];
    return a === b ? powers[a]! : coherence(a, b) * Math.sqrt(powers[a]! * powers[b]!);
  });

describe('shared powers that do not fit together', () => {
  it('become those of layers that may exist; by hand for three that all move against each other', () => {
    // Coherences of −0.9 have the eigenvalues 1.9, 1.9 and −0.8, the last along (1, 1, 1); without it they are −0.5.
    const matrix = symmetric([4, 1, 9], () => -0.9);
    makeSound(matrix, 3);
    [4, -1, -3, -1, 1, -1.5, -3, -1.5, 9].forEach((value, at) => expect(matrix[at]).toBeCloseTo(value, 6));
    const lower = choleskyFactor(matrix, 3);
    for (let a = 0; a < 3; a++) expect(Math.hypot(lower[3 * a]!, lower[3 * a + 1]!, lower[3 * a + 2]!) ** 2).toBeCloseTo([4, 1, 9][a]!, 6);
  });

  it('stay as they are where they fit, also beside a layer without power', () => {
    for (const powers of [[4, 1, 9], [4, 0, 9], [0, 0, 0]]) {
      const matrix = symmetric(powers, (a, b) => (a + b === 1 ? 0.6 : 0.3));
      const before = matrix.slice();
      makeSound(matrix, 3);
      expect(matrix).toEqual(before);
    }
  });

  it('leave no eigenvalue below zero, whatever they were', () => {
    const random = seededRandom(4);
    for (let turn = 0; turn < 200; turn++) {
      const size = 3 + (turn % 3);
      const coherences = Array.from({ length: size * size }, () => 2 * random() - 1);
      const powers = Array.from({ length: size }, () => 10 ** (6 * random() - 3));
      const matrix = symmetric(powers, (a, b) => coherences[Math.max(a, b) * size + Math.min(a, b)]!);
      makeSound(matrix, size);
      const scaled = matrix.map((value, at) => value / Math.sqrt(powers[Math.floor(at / size)]! * powers[at % size]!));
      expect(Math.min(...eigenOf(scaled, size).values)).toBeGreaterThan(-1e-8);
      powers.forEach((power, a) => expect(matrix[a * size + a]).toBe(power));
    }
  });
});

describe('random fields of several layers', () => {
  it.each([3, 4, 5])('of %d vary as much as the layers do, and together as they do', (count) => {
    const side = 40;
    const random = seededRandom(6);
    const draw = () => Float64Array.from({ length: side * side }, () => randomNormal(random));
    const common = draw();
    // The first two share half of their variance, the rest nothing.
    const layers = Array.from({ length: count }, (_, l) => draw().map((value, cell) => (l < 2 ? Math.SQRT1_2 * (value + common[cell]!) : value)));
    const fields = [...surrogateFields(surrogateModel({ width: side, height: side, mask: new Uint8Array(side * side).fill(1) }, layers), 20, random)];
    const covariance = (some: readonly Float64Array[], a: number, b: number) => some[a]!.reduce((sum, value, cell) => sum + value * some[b]![cell]!, 0) / side ** 2;
    for (let a = 0; a < count; a++) {
      for (let b = 0; b <= a; b++) {
        const mean = fields.reduce((sum, field) => sum + covariance(field, a, b), 0) / fields.length;
        expect(Math.abs(mean - covariance(layers, a, b)), `${a} with ${b}`).toBeLessThan(0.08);
      }
    }
  });
});
