/**
 * The table of points that k-means and its quality figures work on: one row a cell or vine, one column a feature,
 * stored row after row in one flat array, so that 250 000 cells of four layers take 8 MB and no objects.
 */

import { AnalysisError } from './analysisError.ts';
import { randomIndex, type Random } from './random.ts';

export interface PointTable {
  /** count × dimensions numbers, row after row; no NaN. */
  readonly values: Float64Array;
  readonly count: number;
  readonly dimensions: number;
}

/** Rows of numbers as a table: pointTable([[1, 2], [3, 4]]) has count 2, dimensions 2, values 1 2 3 4. */
export function pointTable(rows: readonly (readonly number[])[]): PointTable {
  const dimensions = rows[0]?.length ?? 0;
  const values = new Float64Array(rows.length * dimensions);
  rows.forEach((row, point) => {
    if (row.length !== dimensions) throw new AnalysisError('uneven-rows', `Row ${point + 1} has ${row.length} values; ${dimensions} are needed.`);
    values.set(row, point * dimensions);
  });
  return { values, count: rows.length, dimensions };
}

/** The listed points, in the order given. */
export function selectPoints(points: PointTable, chosen: ArrayLike<number>): PointTable {
  const { dimensions } = points;
  const values = new Float64Array(chosen.length * dimensions);
  for (let i = 0; i < chosen.length; i++) {
    const from = chosen[i]! * dimensions;
    for (let f = 0; f < dimensions; f++) values[i * dimensions + f] = points.values[from + f]!;
  }
  return { values, count: chosen.length, dimensions };
}

/**
 * `size` different indices out of `count`, ascending; all of them when there are no more than that.
 * Floyd's way of drawing without replacement (Bentley & Floyd 1987, from memory): one draw per index, no shuffle of all.
 */
export function sampleIndices(count: number, size: number, random: Random): Uint32Array {
  if (size >= count) return Uint32Array.from({ length: count }, (_, i) => i);
  const taken = new Uint8Array(count);
  for (let last = count - size; last < count; last++) {
    const drawn = randomIndex(random, last + 1);
    taken[taken[drawn] === 1 ? last : drawn] = 1;
  }
  const out = new Uint32Array(size);
  let next = 0;
  for (let i = 0; i < count; i++) if (taken[i] === 1) out[next++] = i;
  return out;
}
