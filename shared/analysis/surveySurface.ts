/**
 * The surface that a cleaned survey of points gives on a grid. From about a hundred places on, which a stable semivariogram
 * takes (Webster & Oliver 1992, from memory), it is kriged; below, or where values do not vary, each cell takes the inverse
 * distance mean of the nearest twelve (Shepard 1968). In: points in metres. Out: cells, NaN beyond the data's reach, and how
 * they were made. Readings in one cell count as one place with their mean, as is common before kriging.
 */
import { cellAt, type Cells, type Grid } from './grid.ts';
import { krigeCells } from './resampleKriging.ts';
import { inverseDistance, type ValuedPoints } from './resamplePoints.ts';
import { empiricalVariogram, type VariogramBin } from './variogram.ts';
import { fitVariogram, practicalRangeM, type VariogramModel } from './variogramModel.ts';

export interface SurveySurface {
  readonly cells: Cells;
  readonly method: 'kriging' | 'inverseDistance';
  /** Places that the surface rests on, after readings in one cell became one. */
  readonly places: number;
  readonly reachM: number;
  readonly model: VariogramModel | null;
  readonly bins: readonly VariogramBin[];
  readonly standardError: number | null;
}

const enoughForKriging = 100;
/** Cells farther than this from every reading stay empty: beyond it a reading says nothing of the ground (judgement). */
export const widestReachM = 40;
/** Readings lie a few metres apart: a shorter reach would leave gaps between the lines of a survey. */
const leastReachM = 10;

export function surveySurface(grid: Grid, points: ValuedPoints): SurveySurface {
  const placed = onePlaceACell(grid, points);
  const bins = placed.x.length < enoughForKriging ? [] : empiricalVariogram(placed, { estimator: 'cressieHawkins' });
  const model = fitVariogram(bins);
  if (model === null) return { cells: inverseDistance(grid, points, { reachM: widestReachM }), method: 'inverseDistance', places: placed.x.length, reachM: widestReachM, model, bins: [], standardError: null };
  const reachM = model.partialSill === 0 ? widestReachM : Math.min(widestReachM, Math.max(leastReachM, practicalRangeM(model)));
  const { cells, standardError } = krigeCells(grid, placed, { model, reachM });
  return { cells, method: 'kriging', places: placed.x.length, reachM, model, bins, standardError };
}

/** Points in the same cell become one at their mean position; those outside the grid stay as they are. */
function onePlaceACell(grid: Grid, { x, y, value }: ValuedPoints): ValuedPoints {
  const sums = new Map<number, [x: number, y: number, value: number, count: number]>();
  for (let point = 0; point < x.length; point++) {
    const cell = cellAt(grid, [x[point]!, y[point]!]);
    const key = cell < 0 ? -1 - point : cell;
    const sum = sums.get(key) ?? [0, 0, 0, 0];
    sums.set(key, [sum[0] + x[point]!, sum[1] + y[point]!, sum[2] + value[point]!, sum[3] + 1]);
  }
  const means = [...sums.values()];
  const part = (at: 0 | 1 | 2) => Float64Array.from(means, (mean) => mean[at] / mean[3]);
  return { x: part(0), y: part(1), value: part(2) };
}
