/**
 * How far two maps of the same cells or vines agree, whatever the zones are called: cross-table, Rand and adjusted Rand
 * index (Hubert & Arabie 1985), and for values the stability of ranks between seasons (Spearman 1904).
 */

import { AnalysisError } from './analysisError.ts';

/** counts[a × columns + b] items that are a in the first labelling and b in the second. */
export interface CrossTable {
  readonly counts: Float64Array;
  readonly rows: number;
  readonly columns: number;
  readonly total: number;
}

export function crossTable(first: ArrayLike<number>, second: ArrayLike<number>): CrossTable {
  if (first.length !== second.length) throw new AnalysisError('different-lengths', `The labellings have ${first.length} and ${second.length} items; they must be the same items.`);
  let rows = 0;
  let columns = 0;
  for (let i = 0; i < first.length; i++) {
    rows = Math.max(rows, first[i]! + 1);
    columns = Math.max(columns, second[i]! + 1);
  }
  const counts = new Float64Array(rows * columns);
  for (let i = 0; i < first.length; i++) counts[first[i]! * columns + second[i]!] = counts[first[i]! * columns + second[i]!]! + 1;
  return { counts, rows, columns, total: first.length };
}

/**
 * 1 when the labellings are the same up to names, about 0 when they agree no more than chance, negative below that.
 * adjustedRandIndex([0, 0, 1, 1], [0, 0, 1, 2]) is 0.5714.
 */
export function adjustedRandIndex(first: ArrayLike<number>, second: ArrayLike<number>): number {
  const { both, rows, columns, all } = pairCounts(crossTable(first, second));
  const expected = all > 0 ? (rows * columns) / all : 0;
  const largest = (rows + columns) / 2;
  return largest === expected ? 1 : (both - expected) / (largest - expected);
}

/** Share of pairs of items on which the two labellings agree (Rand 1971): together in both, or apart in both. */
export function randIndex(first: ArrayLike<number>, second: ArrayLike<number>): number {
  const { both, rows, columns, all } = pairCounts(crossTable(first, second));
  return (all + 2 * both - rows - columns) / all;
}

function pairCounts({ counts, rows: rowCount, columns: columnCount, total }: CrossTable) {
  const rowSums = new Float64Array(rowCount);
  const columnSums = new Float64Array(columnCount);
  let both = 0;
  for (let row = 0; row < rowCount; row++) {
    for (let column = 0; column < columnCount; column++) {
      const count = counts[row * columnCount + column]!;
      both += pairs(count);
      rowSums[row] = rowSums[row]! + count;
      columnSums[column] = columnSums[column]! + count;
    }
  }
  return { both, rows: sumOfPairs(rowSums), columns: sumOfPairs(columnSums), all: pairs(total) };
}

function pairs(count: number): number {
  return (count * (count - 1)) / 2;
}

function sumOfPairs(counts: Float64Array): number {
  return counts.reduce((sum, count) => sum + pairs(count), 0);
}

/**
 * Ranks 1…n with ties averaged, as Spearman's correlation needs them.
 * averageRanks([10, 20, 20, 5]) is 2 3.5 3.5 1.
 */
export function averageRanks(values: ArrayLike<number>): Float64Array {
  const order = Uint32Array.from({ length: values.length }, (_, i) => i).sort((a, b) => values[a]! - values[b]!);
  const ranks = new Float64Array(values.length);
  for (let start = 0; start < order.length; ) {
    let end = start;
    while (end < order.length && values[order[end]!] === values[order[start]!]) end++;
    for (let i = start; i < end; i++) ranks[order[i]!] = (start + end + 1) / 2;
    start = end;
  }
  return ranks;
}

/** Spearman's rank correlation of two columns without missing values; NaN when one of them is constant. */
export function rankCorrelation(first: ArrayLike<number>, second: ArrayLike<number>): number {
  return correlation(averageRanks(first), averageRanks(second));
}

/** Pearson's correlation; NaN when one column is constant. Values are taken from the first of their column, so that rounding makes no spread of none. */
export function correlation(first: ArrayLike<number>, second: ArrayLike<number>): number {
  const count = first.length;
  const [originA, originB] = [first[0] ?? 0, second[0] ?? 0];
  let meanA = 0;
  let meanB = 0;
  for (let i = 0; i < count; i++) {
    meanA += (first[i]! - originA) / count;
    meanB += (second[i]! - originB) / count;
  }
  let cross = 0;
  let squareA = 0;
  let squareB = 0;
  for (let i = 0; i < count; i++) {
    const a = first[i]! - originA - meanA;
    const b = second[i]! - originB - meanB;
    cross += a * b;
    squareA += a * a;
    squareB += b * b;
  }
  return squareA > 0 && squareB > 0 ? cross / Math.sqrt(squareA * squareB) : NaN;
}
