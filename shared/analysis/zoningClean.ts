/**
 * From raw zones to zones a person can work: numbered by the first layer, single cells smoothed away, patches below the
 * smallest joined to a neighbour. Cost: some ten reads a cell.
 */

import type { Cells, Grid, Labels } from './grid.ts';
import { majorityFiltered, renumberedByMean } from './labels.ts';
import { cellsForArea, sieveByBorder } from './sieve.ts';
import { findPatches } from './sievePatches.ts';
import type { CellZones } from './zoningFit.ts';

const MAJORITY_PASSES = 2;

export interface CleanOptions {
  readonly smallestPatchHa: number;
  /** Zone 1 has the lowest mean of this layer. */
  readonly orderBy: Cells;
}

/** Cells that clean-up moved to another zone count as wholly doubtful. */
export function cleanZones(grid: Grid, raw: CellZones, { smallestPatchHa, orderBy }: CleanOptions): CellZones {
  if (raw.labels.every((label) => label <= 1)) return raw;
  let cleaned: Labels = raw.labels;
  for (let pass = 0; pass < MAJORITY_PASSES; pass++) cleaned = majorityFiltered(cleaned, grid.cols);
  cleaned = sieveByBorder(cleaned, grid.cols, { minCells: cellsForArea(smallestPatchHa, grid.cellSizeM) });
  const doubt = raw.doubt.map((value, cell) => (cleaned[cell] === raw.labels[cell] ? value : 1));
  return { labels: renumberedByMean(cleaned, orderBy), doubt };
}

/** Connected patches of each zone, by zone number. */
export function patchesPerZone(grid: Grid, labels: Labels): Int32Array {
  const counts = new Int32Array(256);
  for (const label of findPatches(labels, grid.cols, 4).labels) counts[label]!++;
  return counts;
}
