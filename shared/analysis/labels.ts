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
  const counts = new Int32Array(256);
  for (let cell = 0; cell < labels.length; cell++) counts[labels[cell]!]!++;
  let used = 256;
  while (used > 1 && counts[used - 1] === 0) used--;
  return counts.slice(0, used);
}

/** Mean of a layer over each label, by label; NaN for a label without a value. */
export function meanPerLabel(labels: Labels, layer: Cells): Float64Array {
  const counts = new Int32Array(256);
  const sums = new Float64Array(256);
  addPerLabel(labels, layer, { counts, sums });
  return sums.slice(0, highestLabel(labels) + 1).map((sum, label) => (counts[label] === 0 ? NaN : sum / counts[label]!));
}

function addPerLabel(labels: Labels, layer: Cells, { counts, sums }: { counts: Int32Array; sums: Float64Array }): void {
  for (let cell = 0; cell < labels.length; cell++) {
    const value = layer[cell]!;
    if (Number.isNaN(value)) continue;
    const label = labels[cell]!;
    counts[label]! += 1;
    sums[label]! += value;
  }
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

/**
 * Each cell takes the most frequent label of the 3 × 3 cells around it, itself included; a tie keeps the cell's own.
 * Cells outside neither change nor count. Common practice (majority or mode filter). A further pass can change only what
 * lies beside a cell that the pass before changed, so it looks there only. Cost: 9 reads a cell on borders, 5 elsewhere.
 */
export function majorityFiltered(labels: Labels, cols: number, passes = 1): Labels {
  const out = new Uint8Array(labels);
  const votes = new Int32Array(256);
  let changed: number[] = [];
  for (let cell = 0, col = 0; cell < labels.length; cell++, col = col + 1 === cols ? 0 : col + 1) {
    const own = labels[cell]!;
    if (own === 0) continue;
    // With its four neighbours alike a cell has five of nine votes.
    if (col > 0 && col < cols - 1 && labels[cell - 1] === own && labels[cell + 1] === own && labels[cell - cols] === own && labels[cell + cols] === own) continue;
    const label = commonestAround(labels, cols, cell, votes);
    if (label === own) continue;
    out[cell] = label;
    changed.push(cell);
  }
  for (let pass = 1; pass < passes && changed.length > 0; pass++) {
    const beside = cellsAround(changed, cols, labels.length).filter((cell) => out[cell] !== 0);
    const wanted = beside.map((cell) => commonestAround(out, cols, cell, votes));
    changed = beside.filter((cell, i) => out[cell] !== wanted[i]);
    beside.forEach((cell, i) => (out[cell] = wanted[i]!));
  }
  return out;
}

/** Label of most of the 3 × 3 cells, the cell's own at a tie. `votes` is a table of zeros and is left so. */
function commonestAround(labels: Labels, cols: number, cell: number, votes: Int32Array): number {
  const own = labels[cell]!;
  let best = own;
  let tied = false;
  const { north, south, west, east } = squareAround(cell, cols, labels.length);
  for (let from = north; from <= south; from += cols) {
    for (let near = from + west; near <= from + east; near++) {
      const label = labels[near]!;
      if (label === 0) continue;
      const count = ++votes[label]!;
      if (label === best) tied = false;
      else if (count > votes[best]!) [best, tied] = [label, false];
      else if (count === votes[best]!) tied = true;
    }
  }
  for (let from = north; from <= south; from += cols) for (let near = from + west; near <= from + east; near++) votes[labels[near]!] = 0;
  return tied ? own : best;
}

/** First cells of the northmost and southmost row, and first and last column, of the 3 × 3 cells that are on the grid. */
function squareAround(cell: number, cols: number, length: number): { north: number; south: number; west: number; east: number } {
  const col = cell % cols;
  const rowStart = cell - col;
  return { north: Math.max(0, rowStart - cols), south: Math.min(length - cols, rowStart + cols), west: Math.max(0, col - 1), east: Math.min(cols - 1, col + 1) };
}

/** The cells and those beside them, each once. */
function cellsAround(cells: readonly number[], cols: number, length: number): number[] {
  const isTaken = new Uint8Array(length);
  const taken: number[] = [];
  for (const cell of cells) {
    const { north, south, west, east } = squareAround(cell, cols, length);
    for (let from = north; from <= south; from += cols) {
      for (let near = from + west; near <= from + east; near++) {
        if (isTaken[near] === 1) continue;
        isTaken[near] = 1;
        taken.push(near);
      }
    }
  }
  return taken;
}
