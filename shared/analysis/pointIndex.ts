/** Points sorted into square buckets, about three in each, to find all within a distance. Cost to build: linear. */
export class PointIndex {
  private readonly x: Float64Array;
  private readonly y: Float64Array;
  private readonly minX: number;
  private readonly minY: number;
  readonly bucketM: number;
  private readonly cols: number;
  private readonly rows: number;
  /** Points of bucket b are order[start[b]] … order[start[b + 1] − 1], ascending. */
  private readonly start: Int32Array;
  private readonly order: Int32Array;
  private readonly found: Int32Array;

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
    this.found = new Int32Array(x.length);
    bucketOf.forEach((bucket, point) => (this.order[next[bucket]!++] = point));
  }

  /** Points no farther than a distance, in the order of the buckets. The array is used again by the next call. */
  within([x, y]: readonly [number, number], radiusM: number): Int32Array {
    const [firstRow, lastRow] = [this.rowAt(y - radiusM), this.rowAt(y + radiusM)];
    const [firstCol, lastCol] = [this.colAt(x - radiusM), this.colAt(x + radiusM)];
    const reach = radiusM * radiusM;
    let count = 0;
    for (let row = firstRow; row <= lastRow; row++) {
      const to = this.start[row * this.cols + lastCol + 1]!;
      for (let at = this.start[row * this.cols + firstCol]!; at < to; at++) {
        const point = this.order[at]!;
        const [right, up] = [this.x[point]! - x, this.y[point]! - y];
        if (right * right + up * up <= reach) this.found[count++] = point;
      }
    }
    return this.found.subarray(0, count);
  }

  private colAt(x: number): number {
    return Math.min(this.cols - 1, Math.max(0, Math.floor((x - this.minX) / this.bucketM)));
  }

  private rowAt(y: number): number {
    return Math.min(this.rows - 1, Math.max(0, Math.floor((y - this.minY) / this.bucketM)));
  }
}
