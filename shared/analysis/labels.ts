/**
 * Zone labels on a grid: 1, 2, 3 … inside the block, 0 outside. All functions return new arrays.
 */
import type { Cells, Labels } from './grid.ts';

/** Highest label in use; 0 when there is none. */
export function highestLabel(labels: Labels): number {
  let highest = 0;
  for (let cell = 0; cell < labels.length; cell++) if (labels[cell]! > highest) highest = labels[cell]!;
  return highest;
}

/** Cells of each label, by label; `[0]` counts the cells outside. */
export function cellsPerLabel(labels: Labels): Int32Array {
  const counts = new Int32Array(highestLabel(labels) + 1);
  for (const label of labels) counts[label]!++;
  return counts;
}

/** Mean of a layer over each label, by label; NaN for a label without a value. */
export function meanPerLabel(labels: Labels, layer: Cells): Float64Array {
  const counts = new Int32Array(highestLabel(labels) + 1);
  const sums = new Float64Array(counts.length);
  for (let cell = 0; cell < labels.length; cell++) {
    const value = layer[cell]!;
    if (Number.isNaN(value)) continue;
    counts[labels[cell]!]!++;
    sums[labels[cell]!]! += value;
  }
  return sums.map((sum, label) => (counts[label] === 0 ? NaN : sum / counts[label]!));
}

/** Labels under other numbers: `numbers[old]` is the new number; 0 stays 0. */
export function relabelled(labels: Labels, numbers: ArrayLike<number>): Labels {
  const out = new Uint8Array(labels.length);
  for (let cell = 0; cell < labels.length; cell++) if (labels[cell] !== 0) out[cell] = numbers[labels[cell]!]!;
  return out;
}

/**
 * Numbers for the labels in use so that 1 has the lowest mean of the layer, without gaps: `result[old]` is the new number,
 * 0 for a number not in use. Labels without a value come last; ties keep their order.
 */
export function numbersByMean(labels: Labels, layer: Cells): Uint8Array {
  const means = meanPerLabel(labels, layer);
  const counts = cellsPerLabel(labels);
  const used = Array.from(counts.keys()).filter((label) => label > 0 && counts[label]! > 0);
  const rank = (label: number) => (Number.isNaN(means[label]!) ? Infinity : means[label]!);
  const byMean = (a: number, b: number) => (rank(a) === rank(b) ? a - b : rank(a) - rank(b));
  const numbers = new Uint8Array(counts.length);
  [...used].sort(byMean).forEach((label, index) => (numbers[label] = index + 1));
  return numbers;
}

/** Labels renumbered so that 1 has the lowest mean of the layer. */
export function renumberedByMean(labels: Labels, layer: Cells): Labels {
  return relabelled(labels, numbersByMean(labels, layer));
}

/**
 * Each cell takes the most frequent label of the 3 × 3 cells around it, itself included; a tie keeps the cell's own.
 * Cells outside neither change nor count. Common practice (majority or mode filter). Cost: 9 reads a cell.
 */
export function majorityFiltered(labels: Labels, cols: number): Labels {
  const rows = labels.length / cols;
  const out = new Uint8Array(labels);
  const votes = new Int32Array(256);
  for (let row = 0; row < rows; row++) {
    for (let col = 0; col < cols; col++) {
      const at = row * cols + col;
      const own = labels[at]!;
      if (own === 0) continue;
      // With its four neighbours alike a cell has five of nine votes.
      if (col > 0 && col < cols - 1 && labels[at - 1] === own && labels[at + 1] === own && labels[at - cols] === own && labels[at + cols] === own) continue;
      const north = Math.max(0, row - 1) * cols;
      const south = Math.min(rows - 1, row + 1) * cols;
      const west = Math.max(0, col - 1);
      const east = Math.min(cols - 1, col + 1);
      let best = own;
      let tied = false;
      for (let from = north; from <= south; from += cols) {
        for (let cell = from + west; cell <= from + east; cell++) {
          const label = labels[cell]!;
          if (label === 0) continue;
          const count = ++votes[label]!;
          if (label === best) tied = false;
          else if (count > votes[best]!) [best, tied] = [label, false];
          else if (count === votes[best]!) tied = true;
        }
      }
      out[at] = tied ? own : best;
      for (let from = north; from <= south; from += cols) for (let cell = from + west; cell <= from + east; cell++) votes[labels[cell]!] = 0;
    }
  }
  return out;
}
