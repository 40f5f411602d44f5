/**
 * Point readings onto a grid by ordinary kriging in a moving neighbourhood: cells of a small square share the nearest points
 * of each quadrant around its middle, so that a survey driven in lines is not read from one line alone (quadrant search:
 * Isaaks & Srivastava 1989, from memory).
 * In: points in the grid's metres and a model of their likeness. Out: cells, NaN beyond the reach of the data, and the
 * standard error in the middle of the squares. Cost: one factorisation of some twenty points a square of cells.
 */
import { cellCentre, type Cells, type Grid } from './grid.ts';
import { krigingSystem } from './kriging.ts';
import { PointIndex } from './pointIndex.ts';
import { quantileOfSorted } from './quantile.ts';
import type { ValuedPoints } from './resamplePoints.ts';
import type { VariogramModel } from './variogramModel.ts';

export interface KrigedCells {
  readonly cells: Cells;
  /** Median standard error of the estimates; null where no cell is in reach. */
  readonly standardError: number | null;
}

const SQUARE = 4;
const aQuadrant = 6;

export function krigeCells(grid: Grid, points: ValuedPoints, { model, reachM }: { model: VariogramModel; reachM: number }): KrigedCells {
  const cells = new Float32Array(grid.cols * grid.rows).fill(NaN);
  const index = new PointIndex(points.x, points.y);
  const errors: number[] = [];
  for (let row = 0; row < grid.rows; row += SQUARE) {
    for (let col = 0; col < grid.cols; col += SQUARE) {
      const own = cellsOfSquare(grid, col, row);
      if (own.length === 0) continue;
      const [east, north] = [grid.x0 + (col + SQUARE / 2) * grid.cellSizeM, grid.y0 - (row + SQUARE / 2) * grid.cellSizeM];
      const near = neighbours(index, points, { east, north, reachM: reachM + SQUARE * grid.cellSizeM });
      if (near.x.length === 0) continue;
      const system = krigingSystem(near, model);
      for (const cell of own) {
        const [x, y] = cellCentre(grid, cell);
        if (nearestSquared(near, x, y) <= reachM * reachM) cells[cell] = system.valueAt(x, y);
      }
      errors.push(Math.sqrt(Math.max(0, system.detailAt(east, north).variance)));
    }
  }
  return { cells, standardError: errors.length === 0 ? null : quantileOfSorted(errors.sort((a, b) => a - b), 0.5) };
}

function cellsOfSquare(grid: Grid, firstCol: number, firstRow: number): number[] {
  const cells: number[] = [];
  for (let row = firstRow; row < Math.min(grid.rows, firstRow + SQUARE); row++) {
    for (let col = firstCol; col < Math.min(grid.cols, firstCol + SQUARE); col++) if (grid.share[row * grid.cols + col]! > 0) cells.push(row * grid.cols + col);
  }
  return cells;
}

interface Place {
  east: number;
  north: number;
  reachM: number;
}

/** The nearest few points of each quadrant; the search widens until every quadrant has its few or the reach ends. */
function neighbours(index: PointIndex, points: ValuedPoints, { east, north, reachM }: Place): ValuedPoints {
  for (let radiusM = Math.min(reachM, 3 * index.bucketM); ; radiusM *= 2) {
    const found = index.within([east, north], Math.min(radiusM, reachM));
    const quadrants: number[][] = [[], [], [], []];
    for (const point of found) quadrants[(points.x[point]! >= east ? 1 : 0) + (points.y[point]! >= north ? 2 : 0)]!.push(point);
    if (radiusM < reachM && quadrants.some((quadrant) => quadrant.length < aQuadrant)) continue;
    const squared = (point: number) => (points.x[point]! - east) ** 2 + (points.y[point]! - north) ** 2;
    const chosen = quadrants.flatMap((quadrant) => quadrant.sort((a, b) => squared(a) - squared(b)).slice(0, aQuadrant));
    const pick = (from: Float64Array) => Float64Array.from(chosen, (point) => from[point]!);
    return { x: pick(points.x), y: pick(points.y), value: pick(points.value) };
  }
}

function nearestSquared({ x, y }: ValuedPoints, east: number, north: number): number {
  let nearest = Infinity;
  for (let point = 0; point < x.length; point++) nearest = Math.min(nearest, (x[point]! - east) ** 2 + (y[point]! - north) ** 2);
  return nearest;
}
