/**
 * Point readings onto a grid: inverse distance to the power 2 of the nearest 12 points (Shepard 1968), within a reach.
 * In: points in the grid's metres. Out: cells, NaN where no point is in reach or the cell is outside the block.
 * Points in a square of cells have nearly the same neighbours, so the candidates are looked up once a square; the result is
 * exact. Cost: about 30 distances a cell.
 */
import { PointIndex } from './pointIndex.ts';
import type { Cells, Grid } from './grid.ts';

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
  const index = new PointIndex(points.x, points.y);
  const out = new Float32Array(grid.cols * grid.rows).fill(NaN);
  const halfDiagonal = (grid.cellSizeM * (SQUARE - 1)) / Math.SQRT2;
  const nearest = new Nearest(points, neighbours);
  for (let row = 0; row < grid.rows; row += SQUARE) {
    for (let col = 0; col < grid.cols; col += SQUARE) {
      const cells = cellsOfSquare(grid, col, row);
      if (cells.length === 0) continue;
      const centreX = grid.x0 + (col + SQUARE / 2) * grid.cellSizeM;
      const centreY = grid.y0 - (row + SQUARE / 2) * grid.cellSizeM;
      // The nearest points of any cell of the square lie within this of its centre (triangle inequality, twice).
      const radius = Math.min(reachM + halfDiagonal, index.distanceToNth([centreX, centreY], neighbours) + 2 * halfDiagonal);
      const candidates = index.within([centreX, centreY], radius);
      for (const cell of cells) {
        const cellRow = Math.floor(cell / grid.cols);
        const x = grid.x0 + (cell - cellRow * grid.cols + 0.5) * grid.cellSizeM;
        const y = grid.y0 - (cellRow + 0.5) * grid.cellSizeM;
        out[cell] = nearest.mean(candidates, [x, y], { power, reachM });
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

/** Keeps the few nearest of the candidates in order, in two arrays that are used again and again. */
class Nearest {
  private readonly points: ValuedPoints;
  private readonly squares: Float64Array;
  private readonly values: Float64Array;

  constructor(points: ValuedPoints, neighbours: number) {
    this.points = points;
    this.squares = new Float64Array(neighbours);
    this.values = new Float64Array(neighbours);
  }

  mean(candidates: Int32Array, [x, y]: readonly [number, number], { power, reachM }: { power: number; reachM: number }): number {
    const { squares, values, points } = this;
    let kept = 0;
    for (const point of candidates) {
      const square = (points.x[point]! - x) ** 2 + (points.y[point]! - y) ** 2;
      if (square > reachM * reachM || (kept === squares.length && square >= squares[kept - 1]!)) continue;
      let at = kept === squares.length ? kept - 1 : kept++;
      for (; at > 0 && squares[at - 1]! > square; at--) {
        squares[at] = squares[at - 1]!;
        values[at] = values[at - 1]!;
      }
      squares[at] = square;
      values[at] = points.value[point]!;
    }
    if (kept === 0) return NaN;
    return squares[0]! < 1e-12 ? meanOfHits(squares, values, kept) : weightedMean({ squares, values, kept }, power);
  }
}

/** Points at the same place as the cell centre decide alone, however many there are. */
function meanOfHits(squares: Float64Array, values: Float64Array, kept: number): number {
  let sum = 0;
  let count = 0;
  for (let at = 0; at < kept && squares[at]! < 1e-12; at++, count++) sum += values[at]!;
  return sum / count;
}

function weightedMean({ squares, values, kept }: { squares: Float64Array; values: Float64Array; kept: number }, power: number): number {
  let sum = 0;
  let weights = 0;
  for (let at = 0; at < kept; at++) {
    const weight = power === 2 ? 1 / squares[at]! : squares[at]! ** (-power / 2);
    sum += weight * values[at]!;
    weights += weight;
  }
  return sum / weights;
}
