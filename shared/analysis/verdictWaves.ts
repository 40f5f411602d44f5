/**
 * Narrow stripes at even distances, as passes of a machine or a camera leave them, in whatever direction. Profiles every 5° lose
 * them: over a block's length a narrow stripe turned by a degree or two runs into its neighbour. In the two-dimensional
 * periodogram (Renshaw & Ford 1983) they are one high ordinate among those of the same wavelength. Whether chance makes one as
 * high is told by the distribution of the largest of many exponential ordinates (Walker 1914), and the wave must hold most of the
 * power of its direction (g of Fisher 1929), which tells it from a strip or a border; all from memory. What repeats with the wave
 * is then taken off: the means over its phase, as moment matching does swath by swath. Cells and averages of cells see a wave
 * shorter than two of them as a longer one, which repeats just as evenly.
 * In: evidence field. Out: the field without such waves. Cost: two transforms of each layer.
 */

import { createPlaneTransform, powerOfTwoAtLeast } from './covarianceFft.ts';
import { fittedSurface, withoutSurface } from './covarianceTrend.ts';
import type { MaskedPlane } from './covariance.ts';
import { quantileOfSorted } from './quantile.ts';
import type { EvidenceField } from './verdictField.ts';

export interface StripeWave {
  /** Cycles a cell along x and y. */
  readonly x: number;
  readonly y: number;
  /** Share of the variance that its sine explains. */
  readonly share: number;
}

/** Longer waves have stripes as wide as a patch, which a zone could follow. */
const LONGEST_WAVE_M = 30;
/** Chance of such a peak in a layer without stripes. */
const CHANCE = 0.001;
/** Share of a layer's variance that the sine of a wave must explain to move a verdict (judgement). */
const LEAST_SHARE = 0.05;
/**
 * Fisher's g: share of the power of all waves of that direction that the one has. A strip or a border has power at many wavelengths:
 * of a strip of 12 m across 140 m the highest below 30 m has a tenth (judgement).
 */
const LEAST_OF_DIRECTION = 0.4;
const PHASES = 48;
const MOST_WAVES = 3;
/** Ordinates of about the same wavelength that a peak is compared with. */
const LEAST_RING = 40;

export interface EvenedField {
  readonly field: EvidenceField;
  /** Which layers had stripes. */
  readonly evened: readonly boolean[];
}

/** Null when no layer has waves. */
export function withoutWaves(field: EvidenceField): EvenedField | null {
  const layers = field.layers.map((layer) => {
    let rest = layer;
    for (let found = 0; found < MOST_WAVES; found++) {
      const wave = strongestWave(field, rest, field.cellSizeM / LONGEST_WAVE_M);
      if (wave === null || wave.share < LEAST_SHARE) break;
      const repeating = repeatingPart(field, rest, wave);
      rest = rest.map((value, cell) => value - repeating[cell]!);
    }
    return rest;
  });
  const evened = layers.map((layer, l) => layer !== field.layers[l]);
  return evened.includes(true) ? { field: { ...field, layers }, evened } : null;
}

/** The wave that stands out of those of its length, of `least` or more cycles a cell; null when none does. */
export function strongestWave(plane: MaskedPlane, values: ArrayLike<number>, least: number): StripeWave | null {
  const rest = withoutSurface(plane, values, fittedSurface(plane, values, 2));
  const [width, height] = [powerOfTwoAtLeast(2 * plane.width), powerOfTwoAtLeast(2 * plane.height)];
  const padded = new Float64Array(2 * width * height);
  for (let cell = 0; cell < rest.length; cell++) padded[2 * (Math.floor(cell / plane.width) * width + (cell % plane.width))] = rest[cell]!;
  const spectrum = createPlaneTransform(width, height).forward(padded);
  const ordinates = { x: [] as number[], y: [] as number[], power: [] as number[], length: [] as number[] };
  for (let row = 0; row <= height / 2; row++) {
    for (let col = 0; col < width; col++) {
      const [x, y] = [(col < width / 2 ? col : col - width) / width, row / height];
      const length = Math.hypot(x, y);
      if (length < least) continue;
      const at = 2 * (row * width + col);
      ordinates.x.push(x);
      ordinates.y.push(y);
      ordinates.length.push(length);
      ordinates.power.push(spectrum[at]! ** 2 + spectrum[at + 1]! ** 2);
    }
  }
  const peak = highestInItsRing(ordinates);
  // Padding lays several ordinates between two that are independent.
  const independent = (ordinates.power.length * plane.mask.reduce((sum, inside) => sum + inside, 0)) / (width * height);
  if (peak === null || peak.times < Math.log(independent / CHANCE)) return null;
  const wave = refined(plane, rest, { x: ordinates.x[peak.at]!, y: ordinates.y[peak.at]! });
  return shareOfDirection(plane, rest, wave) >= LEAST_OF_DIRECTION ? wave : null;
}

/** Fisher's g along the direction of a wave, over ordinates as far apart as the block tells waves apart. */
function shareOfDirection(plane: MaskedPlane, values: Float64Array, { x, y }: StripeWave): number {
  const length = Math.hypot(x, y);
  const apart = 1 / (Math.abs(plane.width * x) / length + Math.abs(plane.height * y) / length);
  const highest = (0.5 * length) / Math.max(Math.abs(x), Math.abs(y));
  const own = powerAt(plane, values, { x, y });
  let all = 0;
  for (let at = length - Math.ceil(length / apart - 1) * apart; at <= highest; at += apart) all += powerAt(plane, values, { x: (x * at) / length, y: (y * at) / length });
  return own / all;
}

/** How many times the mean of its ring, estimated by the median of exponential ordinates, the ordinate that stands out most is. */
function highestInItsRing({ power, length }: { readonly power: readonly number[]; readonly length: readonly number[] }): { at: number; times: number } | null {
  const order = [...power.keys()].sort((a, b) => length[a]! - length[b]!);
  const size = Math.max(LEAST_RING, Math.ceil(order.length / 40));
  let best: { at: number; times: number } | null = null;
  for (let first = 0; first + size <= order.length; first += size) {
    const ring = order.slice(first, first + 2 * size > order.length ? order.length : first + size);
    const mean = quantileOfSorted(ring.map((at) => power[at]!).sort((a, b) => a - b), 0.5) / Math.LN2;
    for (const at of ring) if (mean > 0 && power[at]! > (best?.times ?? 0) * mean) best = { at, times: power[at]! / mean };
  }
  return best;
}

/** The place of the highest power near a wave, to a hundredth of what the block's size tells apart. */
function refined(plane: MaskedPlane, values: Float64Array, wave: Pick<StripeWave, 'x' | 'y'>): StripeWave {
  let best = { ...wave, power: powerAt(plane, values, wave) };
  for (let step = 0.25; step > 0.005; step /= 2) {
    const middle = best;
    for (const dx of [-1, 0, 1]) {
      for (const dy of [-1, 0, 1]) {
        const near = { x: middle.x + (dx * step) / plane.width, y: middle.y + (dy * step) / plane.height };
        const power = powerAt(plane, values, near);
        if (power > best.power) best = { ...near, power };
      }
    }
  }
  const cells = plane.mask.reduce((sum, inside) => sum + inside, 0);
  return { x: best.x, y: best.y, share: (2 * best.power) / cells / values.reduce((sum, value) => sum + value * value, 0) };
}

function powerAt({ width, mask }: MaskedPlane, values: Float64Array, { x, y }: Pick<StripeWave, 'x' | 'y'>): number {
  let [real, imaginary] = [0, 0];
  for (let cell = 0; cell < mask.length; cell++) {
    if (mask[cell] === 0) continue;
    const angle = 2 * Math.PI * ((cell % width) * x + Math.floor(cell / width) * y);
    real += values[cell]! * Math.cos(angle);
    imaginary += values[cell]! * Math.sin(angle);
  }
  return real * real + imaginary * imaginary;
}

/** Mean of the values at each phase of the wave less the mean of all, at each cell of the mask; 0 elsewhere. */
export function repeatingPart({ width, mask }: MaskedPlane, values: ArrayLike<number>, { x, y }: Pick<StripeWave, 'x' | 'y'>): Float64Array {
  const [sums, counts] = [new Float64Array(PHASES), new Float64Array(PHASES)];
  const phases = Uint8Array.from(mask, (_, cell) => {
    const cycles = (cell % width) * x + Math.floor(cell / width) * y;
    return Math.min(PHASES - 1, Math.floor((cycles - Math.floor(cycles)) * PHASES));
  });
  let [total, cells] = [0, 0];
  for (let cell = 0; cell < mask.length; cell++) {
    if (mask[cell] === 0) continue;
    const phase = phases[cell]!;
    sums[phase] = sums[phase]! + values[cell]!;
    counts[phase] = counts[phase]! + 1;
    total += values[cell]!;
    cells++;
  }
  return Float64Array.from(mask, (inside, cell) => (inside === 1 ? sums[phases[cell]!]! / counts[phases[cell]!]! - total / cells : 0));
}
