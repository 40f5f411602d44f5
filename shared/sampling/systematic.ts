import type { Random } from '../analysis/random.ts';
import type { VineTable } from '../geo/vines.ts';

/**
 * Systematic sampling along the walk through the rows (common practice): every k-th vine from a random start.
 * Best spread on a regular block; its risk is an interval in step with posts, emitters or the length of a row.
 */

/** Places 1 ... listLength of the sample: ceil(start + j * listLength / count), with start in (0, listLength / count]. */
export function systematicPlaces(listLength: number, count: number, start: number): number[] {
  return Array.from({ length: count }, (_, j) => Math.ceil(start + (j * listLength) / count - 1e-9));
}

/** A random start for `systematicPlaces`: in (0, listLength / count], never 0. */
export function systematicStart(listLength: number, count: number, random: Random): number {
  return (1 - random()) * (listLength / count);
}

/** Vines as one would walk them: up the first row that has any, down the next. `vines` ascending as in the table. */
export function serpentine(table: VineTable, vines: readonly number[]): number[] {
  const byRow = new Map<number, number[]>();
  for (const vine of vines) {
    const row = table.row[vine]!;
    const list = byRow.get(row);
    if (list === undefined) byRow.set(row, [vine]);
    else list.push(vine);
  }
  return [...byRow.values()].flatMap((row, i) => (i % 2 === 0 ? row : [...row].reverse()));
}
