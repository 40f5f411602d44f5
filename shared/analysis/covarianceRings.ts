/**
 * A covariance estimated from one block fits no field exactly: some of its power comes out negative. Set to zero it would leave the
 * fields rougher than the layer, because what is cut lies mostly at short waves; scaling all power to the variance (Wood & Chan 1994,
 * from memory) does not mend that. So each ring of frequencies, waves of about one length in all directions, keeps its own sum, and
 * a ring with less than nothing takes from the next longer waves.
 * In: signed power of a plane. Out: power of which none is negative. Cost: two passes.
 */

import type { PlaneTransform } from './covarianceFft.ts';

/** Ring of each frequency: its waves over `reach` cells, rounded. */
export function frequencyRings({ width, height }: Pick<PlaneTransform, 'width' | 'height'>, reach: number): Uint16Array {
  const rings = new Uint16Array(width * height);
  for (let row = 0; row < height; row++) {
    const down = Math.min(row, height - row) / height;
    for (let col = 0; col < width; col++) rings[row * width + col] = Math.round(Math.hypot(Math.min(col, width - col) / width, down) * reach);
  }
  return rings;
}

/** Power 3, −1 in one ring becomes 2, 0. Where all rings together have less than nothing everything is 0. */
export function withoutNegativePower(power: Float64Array, rings: Uint16Array): Float64Array {
  const count = rings.reduce((most, ring) => Math.max(most, ring), 0) + 1;
  const wanted = new Float64Array(count);
  const positive = new Float64Array(count);
  for (let i = 0; i < power.length; i++) {
    wanted[rings[i]!] = wanted[rings[i]!]! + power[i]!;
    positive[rings[i]!] = positive[rings[i]!]! + Math.max(0, power[i]!);
  }
  for (let ring = count - 1; ring > 0; ring--) {
    if (wanted[ring]! >= 0) continue;
    wanted[ring - 1] = wanted[ring - 1]! + wanted[ring]!;
    wanted[ring] = 0;
  }
  return power.map((value, i) => (value > 0 && wanted[rings[i]!]! > 0 ? (value * wanted[rings[i]!]!) / positive[rings[i]!]! : 0));
}
