/**
 * From raw zones to zones a person can work: numbered by the first layer, single cells smoothed away, patches below the
 * smallest joined to a neighbour. Cost: some ten reads a cell.
 */

import type { Cells, Grid, Labels } from './grid.ts';
import { majorityFiltered, renumberedByMean } from './labels.ts';
import { withoutNarrow } from './labelsNarrow.ts';
import { cellsForArea, sieveByBorder } from './sieve.ts';
import type { CellZones } from './zoningFit.ts';

const MAJORITY_PASSES = 2;

export interface CleanOptions {
  readonly smallestPatchHa: number;
  /** Parts of a zone narrower than this join a neighbour; 0 leaves them. */
  readonly narrowestM: number;
  /** Zone 1 has the lowest mean of this layer. */
  readonly orderBy: Cells;
}

/** Cells that clean-up moved to another zone count as wholly doubtful. */
export function cleanZones(grid: Grid, raw: CellZones, { smallestPatchHa, narrowestM, orderBy }: CleanOptions): CellZones {
  if (raw.labels.every((label) => label <= 1)) return raw;
  let cleaned: Labels = raw.labels;
  for (let pass = 0; pass < MAJORITY_PASSES; pass++) cleaned = majorityFiltered(cleaned, grid.cols);
  cleaned = withoutSmall(grid, cleaned, { smallestPatchHa, narrowestM });
  const doubt = raw.doubt.slice();
  for (let cell = 0; cell < doubt.length; cell++) if (cleaned[cell] !== raw.labels[cell]) doubt[cell] = 1;
  return { labels: renumberedByMean(cleaned, orderBy), doubt };
}

/** Nothing narrower and nothing smaller than asked for; what is cut off a narrow place may be small. */
export function withoutSmall({ cols, cellSizeM }: Grid, labels: Labels, { smallestPatchHa, narrowestM }: Omit<CleanOptions, 'orderBy'>): Labels {
  const wide = narrowestM > cellSizeM ? withoutNarrow(labels, cols, { widthM: narrowestM, cellSizeM }) : labels;
  return sieveByBorder(wide, cols, { minCells: cellsForArea(smallestPatchHa, cellSizeM) });
}

/** Patches of each zone, by zone number: cells that share an edge are one patch. Rows are joined run by run. */
export function patchesPerZone({ cols, rows }: Grid, labels: Labels): Int32Array {
  const counts = new Int32Array(256);
  const parents: number[] = [];
  const rootOf = (run: number) => {
    let at = run;
    while (parents[at] !== at) at = parents[at] = parents[parents[at]!]!;
    return at;
  };
  let above = new Int32Array(cols).fill(-1);
  let here = new Int32Array(cols);
  for (let row = 0; row < rows; row++) {
    for (let col = 0; col < cols; col++) {
      const label = labels[row * cols + col]!;
      if (label === 0) {
        here[col] = -1;
        continue;
      }
      const continues = col > 0 && labels[row * cols + col - 1] === label;
      const run = continues ? here[col - 1]! : parents.push(parents.length) - 1;
      here[col] = run;
      if (!continues) counts[label]!++;
      if (row === 0 || labels[(row - 1) * cols + col] !== label) continue;
      // The cell to the left has met the same run above.
      if (continues && labels[(row - 1) * cols + col - 1] === label) continue;
      const [upper, lower] = [rootOf(above[col]!), rootOf(run)];
      if (upper === lower) continue;
      parents[lower] = upper;
      counts[label]!--;
    }
    [above, here] = [here, above];
  }
  return counts;
}
