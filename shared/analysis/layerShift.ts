/**
 * Two layers of one block beside each other: how alike they are, and how far one must be moved to lie on the other.
 * Likeness is the correlation over the cells that both have; from 0.9 on they tell one story twice (common practice).
 * The shift is where the correlation over the cells that then overlap is highest (masked normalised correlation, Padfield 2012,
 * summed directly), made finer than a cell by a parabola. Phase correlation, which sharpens the peak in rectangular pictures,
 * finds the block's own outline first in smooth layers of an irregular block, and is not used.
 * In: cells of both on one grid. Out: correlation and shift. Cost: one pass over at most 40 000 cells for each of 625 shifts.
 */
import type { Cells, Grid } from './grid.ts';

export interface LayerLikeness {
  readonly correlation: number;
  /** How the second must be moved to lie best on the first; 0 and 0 where it lies well. */
  readonly shift: { readonly eastM: number; readonly northM: number };
}

const farthestCells = 12;
const mostCells = 40_000;
const leastShared = 100;
/** A shift is believed when it leaves clearly less unexplained than none (judgement) … */
const leftOver = 0.85;
/** … and the layers then are alike at all. */
const leastCorrelation = 0.5;
/** Half a cell is within what placing pixels on cells may do. */
const leastShiftCells = 0.75;

/** Null where both have fewer than a hundred cells in common, or one does not vary. */
export function layerLikeness(grid: Grid, first: Cells, second: Cells): LayerLikeness | null {
  const step = Math.max(1, Math.ceil(first.length / mostCells));
  const at = (east: number, south: number) => correlationAt(grid, [first, second], { east, south, step });
  const correlation = at(0, 0);
  if (Number.isNaN(correlation)) return null;
  let [best, bestEast, bestSouth] = [correlation, 0, 0];
  for (let south = -farthestCells; south <= farthestCells; south++) {
    for (let east = -farthestCells; east <= farthestCells; east++) {
      const found = at(east, south);
      if (found > best) [best, bestEast, bestSouth] = [found, east, south];
    }
  }
  const fine = (before: number, after: number) => {
    const bend = before - 2 * best + after;
    return bend < 0 ? Math.max(-0.5, Math.min(0.5, (0.5 * (before - after)) / bend)) : 0;
  };
  const east = bestEast + fine(at(bestEast - 1, bestSouth), at(bestEast + 1, bestSouth));
  const south = bestSouth + fine(at(bestEast, bestSouth - 1), at(bestEast, bestSouth + 1));
  // Where likeness still grows at the edge of the search, two slopes lie beside each other and no place is the best.
  const isPeak = Math.abs(bestEast) < farthestCells && Math.abs(bestSouth) < farthestCells;
  const isBelieved = isPeak && best >= leastCorrelation && 1 - best * best < leftOver * (1 - correlation * correlation) && Math.hypot(east, south) >= leastShiftCells;
  // The second is looked up east and south of the first: it must come back by as much.
  return { correlation, shift: isBelieved ? { eastM: 0 - east * grid.cellSizeM, northM: south * grid.cellSizeM } : { eastM: 0, northM: 0 } };
}

/** Correlation of the first with the second as it lies some cells east and south; NaN with too little in common or nothing that varies. */
function correlationAt({ cols, rows, inside }: Grid, [first, second]: readonly [Cells, Cells], { east, south, step }: { east: number; south: number; step: number }): number {
  let [n, a, b, aa, bb, ab] = [0, 0, 0, 0, 0, 0];
  for (let row = Math.max(0, -south); row < Math.min(rows, rows - south); row++) {
    const offset = (row + south) * cols + east;
    for (let col = Math.max(0, -east) + ((row * 7) % step); col < Math.min(cols, cols - east); col += step) {
      const value = first[row * cols + col]!;
      const other = second[offset + col]!;
      // A missing value equals nothing, itself neither.
      if (value !== value || other !== other || inside[row * cols + col] !== 1 || inside[offset + col] !== 1) continue;
      n += 1;
      a += value;
      b += other;
      aa += value * value;
      bb += other * other;
      ab += value * other;
    }
  }
  if (n < leastShared) return NaN;
  const [varianceA, varianceB] = [aa / n - (a / n) ** 2, bb / n - (b / n) ** 2];
  const isLevel = varianceA <= 1e-12 * (aa / n) || varianceB <= 1e-12 * (bb / n);
  return isLevel ? NaN : (ab / n - (a / n) * (b / n)) / Math.sqrt(varianceA * varianceB);
}
