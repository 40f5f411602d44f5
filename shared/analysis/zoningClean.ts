/**
 * From raw zones to zones a person can work: numbered by one layer, single cells smoothed away, patches below the
 * smallest joined to a neighbour. Cost: some ten reads a cell.
 */

import type { Cells, Grid, Labels } from './grid.ts';
import { highestLabel, majorityFiltered, numbersByMean, relabelled } from './labels.ts';
import { withoutNarrow } from './labelsNarrow.ts';
import { cellsForArea, sieveByBorder } from './sieve.ts';
import { patchRuns } from './sieveRuns.ts';
import type { CellZones } from './zoningFit.ts';

const MAJORITY_PASSES = 2;

export interface CleanOptions {
  readonly smallestPatchHa: number;
  /** Parts of a zone narrower than this join a neighbour; 0 leaves them. */
  readonly narrowestM: number;
  /** Zone 1 has the lowest mean of this layer. */
  readonly orderBy: Cells;
}

export interface CleanedZones extends CellZones {
  /** By number from 1 on: which zone of the fit, 1…k, it was. */
  readonly fitted: readonly number[];
}

/** Cells that clean-up moved to another zone count as wholly doubtful. */
export function cleanZones(grid: Grid, raw: CellZones, { smallestPatchHa, narrowestM, orderBy }: CleanOptions): CleanedZones {
  if (highestLabel(raw.labels) <= 1) return { ...raw, fitted: [1] };
  const cleaned = withoutSmall(grid, majorityFiltered(raw.labels, grid.cols, MAJORITY_PASSES), { smallestPatchHa, narrowestM });
  const doubt = raw.doubt.slice();
  doubtWhereMoved(doubt, raw.labels, cleaned);
  const numbers = numbersByMean(cleaned, orderBy);
  const fitted = [...numbers.keys()].filter((zone) => numbers[zone]! > 0).sort((a, b) => numbers[a]! - numbers[b]!);
  return { labels: relabelled(cleaned, numbers), doubt, fitted };
}

/** Whatever fits a zone best and was put into another is wholly doubtful. */
export function doubtWhereMoved(doubt: Cells, before: Labels, after: Labels): void {
  for (let cell = 0; cell < doubt.length; cell++) if (after[cell] !== before[cell]) doubt[cell] = 1;
}

/** Nothing narrower and nothing smaller than asked for; what is cut off a narrow place may be small. */
export function withoutSmall({ cols, cellSizeM }: Grid, labels: Labels, { smallestPatchHa, narrowestM }: Omit<CleanOptions, 'orderBy'>): Labels {
  const wide = narrowestM > cellSizeM ? withoutNarrow(labels, cols, { widthM: narrowestM, cellSizeM }) : labels;
  return sieveByBorder(wide, cols, { minCells: cellsForArea(smallestPatchHa, cellSizeM) });
}

/** Patches of each zone, by zone number: cells that share an edge are one patch. */
export function patchesPerZone({ cols }: Grid, labels: Labels): Int32Array {
  const counts = new Int32Array(256);
  for (const label of patchRuns(labels, cols).labels) counts[label]!++;
  return counts;
}
