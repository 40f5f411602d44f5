/** Points sorted into square buckets, for the nearest few and for all within a distance. Cost to build: linear. */
export class PointIndex {
  private readonly x: Float64Array;
  private readonly y: Float64Array;
  private readonly minX: number;
  private readonly minY: number;
  private readonly bucketM: number;
  private readonly cols: number;
  private readonly rows: number;
  /** Points of bucket b are order[start[b]] … order[start[b + 1] − 1], ascending. */
  private readonly start: Int32Array;
  private readonly order: Int32Array;

  /** About three points a bucket. */
  constructor(x: Float64Array, y: Float64Array) {
    this.x = x;
    this.y = y;
    const least = (values: Float64Array) => values.reduce((low, value) => Math.min(low, value), Infinity);
    const most = (values: Float64Array) => values.reduce((high, value) => Math.max(high, value), -Infinity);
    this.minX = x.length === 0 ? 0 : least(x);
    this.minY = x.length === 0 ? 0 : least(y);
    const width = x.length === 0 ? 0 : most(x) - this.minX;
    const height = x.length === 0 ? 0 : most(y) - this.minY;
    this.bucketM = Math.max(1e-6, Math.sqrt((3 * width * height) / Math.max(1, x.length)), Math.max(width, height) / 2000);
    this.cols = Math.floor(width / this.bucketM) + 1;
    this.rows = Math.floor(height / this.bucketM) + 1;
    this.start = new Int32Array(this.cols * this.rows + 1);
    const bucketOf = Int32Array.from(x, (value, point) => this.rowAt(y[point]!) * this.cols + this.colAt(value));
    for (const bucket of bucketOf) this.start[bucket + 1]!++;
    for (let bucket = 0; bucket < this.cols * this.rows; bucket++) this.start[bucket + 1]! += this.start[bucket]!;
    const next = this.start.slice();
    this.order = new Int32Array(x.length);
    bucketOf.forEach((bucket, point) => (this.order[next[bucket]!++] = point));
  }

  /** Points no farther than a distance, in the order of the buckets. */
  within([x, y]: readonly [number, number], radiusM: number): Int32Array {
    const found: number[] = [];
    for (let row = this.rowAt(y - radiusM); row <= this.rowAt(y + radiusM); row++) {
      const from = this.start[row * this.cols + this.colAt(x - radiusM)]!;
      const to = this.start[row * this.cols + this.colAt(x + radiusM) + 1]!;
      for (let at = from; at < to; at++) {
        const point = this.order[at]!;
        if ((this.x[point]! - x) ** 2 + (this.y[point]! - y) ** 2 <= radiusM * radiusM) found.push(point);
      }
    }
    return Int32Array.from(found);
  }

  /** Distance to the n-th nearest point, infinite when there are fewer. Doubles a circle until it holds n points. */
  distanceToNth(place: readonly [number, number], n: number): number {
    if (this.x.length < n) return Infinity;
    for (let radiusM = this.bucketM * 2; ; radiusM *= 2) {
      const found = this.within(place, radiusM);
      if (found.length < n) continue;
      const squares = Float64Array.from(found, (point) => (this.x[point]! - place[0]) ** 2 + (this.y[point]! - place[1]) ** 2).sort();
      return Math.sqrt(squares[n - 1]!);
    }
  }

  private colAt(x: number): number {
    return Math.min(this.cols - 1, Math.max(0, Math.floor((x - this.minX) / this.bucketM)));
  }

  private rowAt(y: number): number {
    return Math.min(this.rows - 1, Math.max(0, Math.floor((y - this.minY) / this.bucketM)));
  }
}
