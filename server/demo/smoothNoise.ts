import { seededRandom } from '../../shared/analysis/random.ts';

/** A smooth field over the plane, mean about 0 and values mostly within ±1, the same for the same seed. */
export type Field = (x: number, y: number) => number;

const side = 64;

/** Value noise: random numbers on a lattice of `spacingM` metres, joined by a quintic blend (common practice in computer graphics). */
export function smoothNoise(seed: number, spacingM: number): Field {
  const random = seededRandom(seed);
  const lattice = Float64Array.from({ length: side * side }, () => 2 * random() - 1);
  const at = (col: number, row: number) => lattice[(((row % side) + side) % side) * side + (((col % side) + side) % side)]!;
  return (x, y) => {
    const u = x / spacingM;
    const v = y / spacingM;
    const col = Math.floor(u);
    const row = Math.floor(v);
    const a = blend(u - col);
    const b = blend(v - row);
    const low = at(col, row) + a * (at(col + 1, row) - at(col, row));
    const high = at(col, row + 1) + a * (at(col + 1, row + 1) - at(col, row + 1));
    return low + b * (high - low);
  };
}

const blend = (t: number) => t * t * t * (t * (6 * t - 15) + 10);

/** 0 well below the threshold, 1 well above, a short slope between: what makes plateaus out of a slope. */
export function step(value: number, threshold: number, width: number): number {
  return 1 / (1 + Math.exp(-(value - threshold) / width));
}
