/**
 * Point readings onto a grid: inverse distance to the power 2 of the nearest 12 points (Shepard 1968), within a reach.
 * In: points in the grid's metres. Out: cells, NaN where no point is in reach or the cell is outside the block.
 * Points in a square of cells have nearly the same neighbours, so the candidates are looked up once a square; the result is
 * exact. Cost: about 30 distances a cell.
 */
import type { XY } from '../geo/coordinates.ts';
import { cellCentre, type Cells, type Grid } from './grid.ts';
import { PointIndex } from './pointIndex.ts';

export interface ValuedPoints {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
}

export interface InverseDistanceOptions {
  readonly neighbours?: number;
  readonly power?: number;
  /** Cells farther than this from every point stay missing, and points farther away do not count. */
  readonly reachM?: number;
}

const SQUARE = 4;

/** A cell centre that lies on a point takes its value. Points (0,0) 0.50, (10,0) 0.62, (0,10) 0.55, (15,12) 0.70 give 0.571087 at (5,5). */
export function inverseDistance(grid: Grid, points: ValuedPoints, { neighbours = 12, power = 2, reachM = 40 }: InverseDistanceOptions = {}): Cells {
  const out = new Float32Array(grid.cols * grid.rows).fill(NaN);
  const halfDiagonal = (grid.cellSizeM * (SQUARE - 1)) / Math.SQRT2;
  const nearest = new Nearest(points, { neighbours, power, reachM });
  for (let row = 0; row < grid.rows; row += SQUARE) {
    for (let col = 0; col < grid.cols; col += SQUARE) {
      const cells = cellsOfSquare(grid, col, row);
      if (cells.length === 0) continue;
      nearest.lookAround([grid.x0 + (col + SQUARE / 2) * grid.cellSizeM, grid.y0 - (row + SQUARE / 2) * grid.cellSizeM], halfDiagonal);
      for (const cell of cells) {
        const [x, y] = cellCentre(grid, cell);
        out[cell] = nearest.meanAt(x, y);
      }
    }
  }
  return out;
}

function cellsOfSquare(grid: Grid, firstCol: number, firstRow: number): number[] {
  const cells: number[] = [];
  for (let row = firstRow; row < Math.min(grid.rows, firstRow + SQUARE); row++) {
    for (let col = firstCol; col < Math.min(grid.cols, firstCol + SQUARE); col++) if (grid.share[row * grid.cols + col]! > 0) cells.push(row * grid.cols + col);
  }
  return cells;
}

/** The candidates around a place, nearest first, and the few of them that a cell near that place needs. */
class Nearest {
  private readonly points: ValuedPoints;
  private readonly index: PointIndex;
  private readonly power: number;
  private readonly reachM: number;
  private readonly squares: Float64Array;
  private readonly values: Float64Array;
  private centre: XY = [0, 0];
  private radius: number;
  private count = 0;
  /** Candidates and their squared distances from the centre, ascending. */
  private readonly ordered: Int32Array;
  private readonly fromCentre: Float64Array;

  constructor(points: ValuedPoints, { neighbours, power, reachM }: Required<InverseDistanceOptions>) {
    this.points = points;
    this.index = new PointIndex(points.x, points.y);
    this.power = power;
    this.reachM = reachM;
    this.squares = new Float64Array(neighbours);
    this.values = new Float64Array(neighbours);
    this.radius = this.index.bucketM * 2;
    this.ordered = new Int32Array(points.x.length);
    this.fromCentre = new Float64Array(points.x.length);
  }

  /**
   * Gathers what any place up to `slackM` from the centre may need: its nearest points lie within the distance of the
   * centre's own n-th nearest and twice the slack (triangle inequality). The last circle is the first guess for the next.
   */
  lookAround(centre: XY, slackM: number): void {
    const [wanted, widest] = [this.squares.length, this.reachM + slackM];
    this.centre = centre;
    for (let radius = Math.min(this.radius, widest); ; ) {
      this.order(this.index.within(centre, radius));
      const needed = this.count < wanted ? widest : Math.min(widest, Math.sqrt(this.fromCentre[wanted - 1]!) + 2 * slackM);
      if (needed <= radius) {
        this.radius = needed * 1.05;
        return;
      }
      radius = this.count < wanted ? Math.min(widest, radius * 1.6) : needed;
    }
  }

  /** Insertion sort: the candidates are few. */
  private order(candidates: Int32Array): void {
    const { ordered, fromCentre, points } = this;
    this.count = candidates.length;
    for (let at = 0; at < candidates.length; at++) {
      const point = candidates[at]!;
      const [right, up] = [points.x[point]! - this.centre[0], points.y[point]! - this.centre[1]];
      const square = right * right + up * up;
      let place = at;
      for (; place > 0 && fromCentre[place - 1]! > square; place--) {
        fromCentre[place] = fromCentre[place - 1]!;
        ordered[place] = ordered[place - 1]!;
      }
      fromCentre[place] = square;
      ordered[place] = point;
    }
  }

  /** Mean at a place near the centre; the search ends where the remaining candidates must be farther than those kept. */
  meanAt(x: number, y: number): number {
    const { squares, values, points } = this;
    const [east, north] = [x - this.centre[0], y - this.centre[1]];
    const offCentre = Math.sqrt(east * east + north * north);
    let limit = this.reachM * this.reachM;
    let outer = Infinity;
    let kept = 0;
    for (let at = 0; at < this.count; at++) {
      if (this.fromCentre[at]! > outer) break;
      const point = this.ordered[at]!;
      const [right, up] = [points.x[point]! - x, points.y[point]! - y];
      const square = right * right + up * up;
      if (square > limit || (kept === squares.length && square === limit)) continue;
      let place = kept === squares.length ? kept - 1 : kept++;
      for (; place > 0 && squares[place - 1]! > square; place--) {
        squares[place] = squares[place - 1]!;
        values[place] = values[place - 1]!;
      }
      squares[place] = square;
      values[place] = points.value[point]!;
      if (kept < squares.length) continue;
      limit = squares[kept - 1]!;
      outer = (Math.sqrt(limit) + offCentre) ** 2;
    }
    if (kept === 0) return NaN;
    return squares[0]! < 1e-12 ? this.meanOfHits(kept) : this.weightedMean(kept);
  }

  /** Points at the very place decide alone, however many there are. */
  private meanOfHits(kept: number): number {
    let sum = 0;
    let count = 0;
    for (; count < kept && this.squares[count]! < 1e-12; count++) sum += this.values[count]!;
    return sum / count;
  }

  private weightedMean(kept: number): number {
    let sum = 0;
    let weights = 0;
    for (let at = 0; at < kept; at++) {
      const weight = this.power === 2 ? 1 / this.squares[at]! : this.squares[at]! ** (-this.power / 2);
      sum += weight * this.values[at]!;
      weights += weight;
    }
    return sum / weights;
  }
}
