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
  const squares = new PointSquares(x, y);
  const differences = Float64Array.from(value, (own, point) => {
    const around = squares.around(point).filter((other) => other !== point).map((other) => value[other]!);
    return around.length < leastAround ? 0 : own - median(around);
  });
  const scale = 1.4826 * median(Array.from(differences, Math.abs));
  return Uint8Array.from(differences, (difference) => (scale > 0 && Math.abs(difference) > limit * scale ? 1 : 0));
}

class PointSquares {
  private readonly squareOf: Int32Array;
  private readonly members: number[][];
  private readonly cols: number;

  constructor(x: Float64Array, y: Float64Array) {
    const [minX, maxX] = rangeOf(x);
    const [minY, maxY] = rangeOf(y);
    const sideM = Math.max(1e-6, Math.sqrt(((maxX - minX) * (maxY - minY) * pointsPerSquare) / Math.max(1, x.length)), Math.max(maxX - minX, maxY - minY) / 1000);
    this.cols = Math.floor((maxX - minX) / sideM) + 3;
    // An empty border of squares saves asking whether a neighbour exists.
    this.squareOf = Int32Array.from(x, (east, point) => (Math.floor((y[point]! - minY) / sideM) + 1) * this.cols + Math.floor((east - minX) / sideM) + 1);
    this.members = Array.from({ length: this.cols * (Math.floor((maxY - minY) / sideM) + 3) }, () => []);
    this.squareOf.forEach((square, point) => this.members[square]!.push(point));
  }

  around(point: number): number[] {
    const own = this.squareOf[point]!;
    const found: number[] = [];
    for (const row of [-this.cols, 0, this.cols]) for (const col of [-1, 0, 1]) found.push(...this.members[own + row + col]!);
    return found;
  }
}

function rangeOf(values: Float64Array): [number, number] {
  let [low, high] = [Infinity, -Infinity];
  for (const value of values) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  return values.length === 0 ? [0, 0] : [low, high];
}

function median(values: number[]): number {
  const sorted = values.sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length === 0 ? 0 : sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
