/**
 * Readings of a survey on the move that were taken while nearly standing, where a sensor reads one spot again and again or is
 * being turned round, and those whose position leapt. Speeds are compared with the survey's own usual one: from the file's
 * speeds, or from the steps between readings in their order, which a sensor takes at a steady beat (limits are judgement).
 * Points that are not in the order of a drive have no steps to judge. In: points in metres. Out: 1 for each odd one.
 */
import { quantileOfSorted } from './quantile.ts';
import type { ValuedPoints } from './resamplePoints.ts';

const slowest = 0.25;
const fastest = 3;
/** A leap away and back, not the long way to the next row. */
const leap = 5;
/** Fewer readings than this are no drive. */
const leastReadings = 50;

/** Readings a metre apart with three at a tenth of it in the middle: those three are odd. */
export function oddSpeeds({ x, y }: ValuedPoints, speed: Float64Array | null): Uint8Array {
  const odd = new Uint8Array(x.length);
  if (x.length < leastReadings) return odd;
  if (speed !== null) {
    const usual = medianOf(speed.filter((each) => each > 0));
    return Number.isNaN(usual) ? odd : odd.map((_, point) => (speed[point]! < slowest * usual || speed[point]! > fastest * usual ? 1 : 0));
  }
  const steps = Float64Array.from(x, (east, point) => (point === 0 ? NaN : Math.hypot(east - x[point - 1]!, y[point]! - y[point - 1]!)));
  const usual = medianOf(steps.subarray(1));
  if (!(usual > 0) || usual > 2 * spacingOf(x, y)) return odd;
  for (let point = 1; point < x.length; point++) {
    const [before, after] = [steps[point]!, steps[point + 1] ?? NaN];
    const leapt = before > leap * usual && after > leap * usual && Math.hypot(x[point + 1]! - x[point - 1]!, y[point + 1]! - y[point - 1]!) < leap * usual;
    if (before < slowest * usual || leapt) odd[point] = 1;
  }
  return odd;
}

/** Side of the square that each reading would have to itself. */
function spacingOf(x: Float64Array, y: Float64Array): number {
  const span = (values: Float64Array) => values.reduce((high, value) => Math.max(high, value), -Infinity) - values.reduce((low, value) => Math.min(low, value), Infinity);
  return Math.sqrt((Math.max(1, span(x)) * Math.max(1, span(y))) / x.length);
}

function medianOf(values: Float64Array): number {
  return values.length === 0 ? NaN : quantileOfSorted(Float64Array.from(values).sort(), 0.5);
}
