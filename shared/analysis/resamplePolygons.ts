/**
 * Polygons with an attribute, such as a soil map, onto a grid by the exact area they share with each cell.
 * In: polygons in the grid's metres. Out: cells, NaN where no polygon with a value reaches. Cost: edges × cells crossed,
 * plus the cells of each polygon's surroundings.
 */
import type { MultiPolygonXY } from '../geo/coordinates.ts';
import { eachCellShare } from './cellShares.ts';
import { toCellRing, type Cells, type GridFrame } from './grid.ts';

export interface ValuedPolygons<V> {
  readonly polygonsXY: MultiPolygonXY;
  /** null where the attribute is empty: such ground counts as unknown. */
  readonly value: V | null;
}

/** Mean of the values in each cell, weighted by area: a cell ¼ in a polygon of 80 and ¾ in one of 120 gets 110. */
export function polygonMeans(grid: GridFrame, features: readonly ValuedPolygons<number>[]): Cells {
  const sums = new Float64Array(grid.cols * grid.rows);
  const weights = new Float64Array(sums.length);
  for (const { polygonsXY, value } of features) {
    if (value === null || !Number.isFinite(value)) continue;
    eachCellShare(ringsInCells(grid, polygonsXY), grid, (cell, share) => {
      sums[cell]! += share * value;
      weights[cell]! += share;
    });
  }
  const means = new Float32Array(sums.length);
  for (let cell = 0; cell < means.length; cell++) means[cell] = weights[cell]! > 1e-6 ? sums[cell]! / weights[cell]! : NaN;
  return means;
}

export interface ClassCells {
  /** Index into `classes` per cell, NaN where none. */
  readonly cells: Cells;
  /** The classes found, in alphabetical order of their code units, so that the same map gives the same numbers. */
  readonly classes: readonly string[];
}

/** Class with the largest share of each cell; of equal shares the first in order. */
export function polygonClasses(grid: GridFrame, features: readonly ValuedPolygons<string>[]): ClassCells {
  const classes = [...new Set(features.flatMap(({ value }) => (value === null ? [] : [value])))].sort();
  const best = new Float64Array(grid.cols * grid.rows).fill(1e-6);
  const cells = new Float32Array(best.length).fill(NaN);
  const shareOfClass = new Float64Array(best.length);
  classes.forEach((name, index) => {
    const touched: number[] = [];
    for (const { polygonsXY, value } of features) {
      if (value !== name) continue;
      eachCellShare(ringsInCells(grid, polygonsXY), grid, (cell, share) => {
        touched.push(cell);
        shareOfClass[cell]! += share;
      });
    }
    for (const cell of touched) {
      // Sums of shares carry rounding; a lead below a millionth is a tie.
      if (shareOfClass[cell]! > best[cell]! + 1e-6 || (Number.isNaN(cells[cell]!) && shareOfClass[cell]! > best[cell]!)) {
        best[cell] = shareOfClass[cell]!;
        cells[cell] = index;
      }
    }
    for (const cell of touched) shareOfClass[cell] = 0;
  });
  return { cells, classes };
}

function ringsInCells(grid: GridFrame, polygonsXY: MultiPolygonXY): Float64Array[][] {
  return polygonsXY.map((rings) => rings.map((ring) => toCellRing(ring, grid)));
}
