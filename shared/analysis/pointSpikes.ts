/**
 * Readings of a survey that have nothing to do with the readings around them: a wire, a post, a lost contact. Each value is
 * compared with the median of the values in the nine squares around it; what lies further from it than six robust standard
 * deviations of all such differences is a spike (identifier of Hampel 1974, applied to local medians as in Spekken, Anselmi
 * & Molin 2013, from memory; the six is judgement). Real borders between soils pass, because half of the points around one
 * lie on either side. In: points in metres. Out: 1 for each spike. Cost: some twenty values a point.
 */
import type { ValuedPoints } from './resamplePoints.ts';

const limit = 6;
/** Points in a square, on average: nine squares then hold enough for a median and little beyond the neighbourhood. */
const pointsPerSquare = 2;
/** Fewer points than this around one say nothing about it. */
const leastAround = 5;

/** Ten readings of 20 to 22 in a row and one of 90 among them: the 90 is a spike. */
export function spikes({ x, y, value }: ValuedPoints): Uint8Array {
  const squares = squaresOf(x, y);
  const around = new Float64Array(x.length);
  const differences = new Float64Array(x.length);
  for (let point = 0; point < x.length; point++) {
    const count = gather(squares, point, value, around);
    differences[point] = count < leastAround ? 0 : value[point]! - middleOf(around, count);
  }
  const scale = 1.4826 * middleOf(differences.map(Math.abs).sort(), x.length);
  return Uint8Array.from(differences, (difference) => (scale > 0 && Math.abs(difference) > limit * scale ? 1 : 0));
}

/** Points by square: those of square s are order[start[s]] … order[start[s + 1] − 1]. */
interface Squares {
  readonly squareOf: Int32Array;
  readonly start: Int32Array;
  readonly order: Int32Array;
  readonly cols: number;
}

function squaresOf(x: Float64Array, y: Float64Array): Squares {
  const [minX, maxX] = rangeOf(x);
  const [minY, maxY] = rangeOf(y);
  const sideM = Math.max(1e-6, Math.sqrt(((maxX - minX) * (maxY - minY) * pointsPerSquare) / Math.max(1, x.length)), Math.max(maxX - minX, maxY - minY) / 1000);
  const cols = Math.floor((maxX - minX) / sideM) + 3;
  const count = cols * (Math.floor((maxY - minY) / sideM) + 3);
  // An empty border of squares saves asking whether a neighbour exists.
  const squareOf = Int32Array.from(x, (east, point) => (Math.floor((y[point]! - minY) / sideM) + 1) * cols + Math.floor((east - minX) / sideM) + 1);
  const start = new Int32Array(count + 1);
  for (const square of squareOf) start[square + 1]!++;
  for (let square = 0; square < count; square++) start[square + 1]! += start[square]!;
  const next = start.slice();
  const order = new Int32Array(x.length);
  squareOf.forEach((square, point) => (order[next[square]!++] = point));
  return { squareOf, start, order, cols };
}

/** Puts the values of the other points in the nine squares around one into `found` in ascending order; returns how many. */
function gather({ squareOf, start, order, cols }: Squares, point: number, value: Float64Array, found: Float64Array): number {
  const own = squareOf[point]!;
  let count = 0;
  for (let first = own - cols - 1; first <= own + cols - 1; first += cols) {
    for (let at = start[first]!; at < start[first + 3]!; at++) {
      if (order[at] === point) continue;
      const each = value[order[at]!]!;
      let place = count++;
      for (; place > 0 && found[place - 1]! > each; place--) found[place] = found[place - 1]!;
      found[place] = each;
    }
  }
  return count;
}

function rangeOf(values: Float64Array): [number, number] {
  let [low, high] = [Infinity, -Infinity];
  for (let i = 0; i < values.length; i++) {
    if (values[i]! < low) low = values[i]!;
    if (values[i]! > high) high = values[i]!;
  }
  return values.length === 0 ? [0, 0] : [low, high];
}

/** Median of the first `count` values, which are in order. */
function middleOf(sorted: Float64Array, count: number): number {
  const middle = count >> 1;
  return count === 0 ? 0 : count % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
