/**
 * Nearest-point search over a set that may shrink: points in square buckets, searched in rings round the question.
 * Exact, with ties to the lowest index. About two points a bucket; a question costs a few buckets.
 */
export class NearestPoints {
  private readonly minX: number;
  private readonly minY: number;
  private readonly bucketM: number;
  private readonly cols: number;
  private readonly rows: number;
  private readonly start: Int32Array;
  private readonly live: Int32Array;
  private readonly items: Int32Array;
  private readonly x: ArrayLike<number>;
  private readonly y: ArrayLike<number>;

  constructor(x: ArrayLike<number>, y: ArrayLike<number>) {
    this.x = x;
    this.y = y;
    const [minX, width] = extent(x);
    const [minY, height] = extent(y);
    const count = Math.max(1, x.length);
    this.minX = minX;
    this.minY = minY;
    this.bucketM = Math.max(Math.sqrt((2 * width * height) / count), (2 * Math.max(width, height)) / count) || 1;
    this.cols = Math.floor(width / this.bucketM) + 1;
    this.rows = Math.floor(height / this.bucketM) + 1;
    this.live = new Int32Array(this.cols * this.rows);
    for (let point = 0; point < x.length; point++) this.live[this.bucketOf(point)]! += 1;
    this.start = new Int32Array(this.live.length);
    for (let bucket = 1; bucket < this.start.length; bucket++) this.start[bucket] = this.start[bucket - 1]! + this.live[bucket - 1]!;
    this.items = new Int32Array(x.length);
    const filled = Int32Array.from(this.start);
    for (let point = 0; point < x.length; point++) this.items[filled[this.bucketOf(point)]!++] = point;
  }

  /** Takes a point out of later searches. */
  remove(point: number): void {
    const bucket = this.bucketOf(point);
    const start = this.start[bucket]!;
    const last = start + this.live[bucket]! - 1;
    const at = this.items.indexOf(point, start);
    if (at < 0 || at > last) return;
    this.items[at] = this.items[last]!;
    this.items[last] = point;
    this.live[bucket]! -= 1;
  }

  /** Index of the nearest point still in the set, `except` left out; -1 when there is none. */
  nearest(px: number, py: number, except = -1): number {
    const centreCol = clamp(Math.floor((px - this.minX) / this.bucketM), this.cols - 1);
    const centreRow = clamp(Math.floor((py - this.minY) / this.bucketM), this.rows - 1);
    let best = -1;
    let bestSquare = Infinity;
    const furthest = Math.max(centreCol, this.cols - 1 - centreCol, centreRow, this.rows - 1 - centreRow);
    for (let reach = 0; reach <= furthest; reach++) {
      const left = centreCol - reach;
      const right = centreCol + reach;
      const low = centreRow - reach;
      const high = centreRow + reach;
      for (let row = Math.max(0, low); row <= Math.min(this.rows - 1, high); row++) {
        const wholeRow = row === low || row === high;
        for (let col = Math.max(0, left); col <= Math.min(this.cols - 1, right); col++) {
          // inner buckets of this ring were searched before: step over to its right side
          if (!wholeRow && col > left && col < right) {
            col = right - 1;
            continue;
          }
          const bucket = row * this.cols + col;
          const first = this.start[bucket]!;
          for (let at = first + this.live[bucket]! - 1; at >= first; at--) {
            const point = this.items[at]!;
            if (point === except) continue;
            const square = (this.x[point]! - px) ** 2 + (this.y[point]! - py) ** 2;
            if (square < bestSquare || (square === bestSquare && point < best)) {
              best = point;
              bestSquare = square;
            }
          }
        }
      }
      const unseen = this.distanceToUnseen(px, py, { left, right, low, high });
      if (unseen > 0 && bestSquare < unseen * unseen) break;
    }
    return best;
  }

  /** Least distance to any bucket outside the searched square, a hair less so that ties on an edge are still looked at. */
  private distanceToUnseen(px: number, py: number, seen: { left: number; right: number; low: number; high: number }): number {
    let least = Infinity;
    if (seen.left > 0) least = Math.min(least, px - (this.minX + seen.left * this.bucketM));
    if (seen.right < this.cols - 1) least = Math.min(least, this.minX + (seen.right + 1) * this.bucketM - px);
    if (seen.low > 0) least = Math.min(least, py - (this.minY + seen.low * this.bucketM));
    if (seen.high < this.rows - 1) least = Math.min(least, this.minY + (seen.high + 1) * this.bucketM - py);
    return least - 1e-6 * this.bucketM;
  }

  private bucketOf(point: number): number {
    const col = clamp(Math.floor((this.x[point]! - this.minX) / this.bucketM), this.cols - 1);
    const row = clamp(Math.floor((this.y[point]! - this.minY) / this.bucketM), this.rows - 1);
    return row * this.cols + col;
  }
}

function clamp(value: number, most: number): number {
  return Math.min(most, Math.max(0, value));
}

function extent(values: ArrayLike<number>): [least: number, span: number] {
  if (values.length === 0) return [0, 0];
  let least = Infinity;
  let most = -Infinity;
  for (let i = 0; i < values.length; i++) {
    least = Math.min(least, values[i]!);
    most = Math.max(most, values[i]!);
  }
  return [least, most - least];
}
