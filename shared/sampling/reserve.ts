import type { VineTable } from '../geo/vines.ts';

/** Distances nearer than this count as equal, so that ties do not hang on rounding. */
const TIE_M2 = 1e-6;

/**
 * A reserve for each target, fixed when the plan is locked so that nobody chooses in the field. Targets in draw order.
 * A reserve is eligible, in the same zone, no target and no reserve of an earlier target: the next higher vine of the
 * row; else the next lower; else, in the nearest row that has one (both neighbours together), the nearest vine, ties to
 * the lower row, then the lower vine; else null. Own rule.
 */
export function reserveVines(table: VineTable, eligible: readonly number[], targets: readonly number[]): (number | null)[] {
  const free = new Uint8Array(table.count);
  for (const vine of eligible) free[vine] = 1;
  for (const vine of targets) free[vine] = 0;
  return targets.map((target) => {
    const reserve = inOwnRow(table, free, target) ?? inOtherRow(table, free, target);
    if (reserve !== null) free[reserve] = 0;
    return reserve;
  });
}

function inOwnRow(table: VineTable, free: Uint8Array, target: number): number | null {
  const row = table.row[target]!;
  for (let vine = target + 1; vine < table.rowStart[row + 1]!; vine++) if (free[vine] === 1) return vine;
  for (let vine = target - 1; vine >= table.rowStart[row]!; vine--) if (free[vine] === 1) return vine;
  return null;
}

function inOtherRow(table: VineTable, free: Uint8Array, target: number): number | null {
  const rowCount = table.rowStart.length - 1;
  const row = table.row[target]!;
  for (let away = 1; away < rowCount; away++) {
    let best: number | null = null;
    let bestSquare = Infinity;
    for (const near of [row - away, row + away]) {
      if (near < 0 || near >= rowCount) continue;
      for (let vine = table.rowStart[near]!; vine < table.rowStart[near + 1]!; vine++) {
        if (free[vine] === 0) continue;
        const square = (table.x[vine]! - table.x[target]!) ** 2 + (table.y[vine]! - table.y[target]!) ** 2;
        if (square < bestSquare - TIE_M2) [best, bestSquare] = [vine, square];
      }
    }
    if (best !== null) return best;
  }
  return null;
}
