/**
 * Connected patches as runs: stretches of one label along a row, joined with those of the row above that they share cell edges
 * with. In: labels, 0 outside. Out: runs with the patch each belongs to; patches are numbered in the order of their first cell.
 * Zones have a few runs a row, so what is asked of their patches afterwards costs next to nothing. Cost: every cell once.
 */
import type { Labels } from './grid.ts';

interface Runs {
  readonly cols: number;
  /** First cell of each run and the one after its last, ascending; cells outside are in none. */
  readonly starts: readonly number[];
  readonly ends: readonly number[];
  /** Runs of row r are firstRun[r] … firstRun[r + 1] − 1. */
  readonly firstRun: Int32Array;
}

export interface PatchRuns extends Runs {
  /** Patch of each run. */
  readonly patchOf: Int32Array;
  /** Cells and label of each patch. */
  readonly sizes: Int32Array;
  readonly labels: Uint8Array;
}

/** Rows `112` / `122` hold four runs and two patches of three cells. */
export function patchRuns(labels: Labels, cols: number): PatchRuns {
  const runs = runsOf(labels, cols);
  const { starts, ends } = runs;
  const parents = Int32Array.from(starts.keys());
  eachTouching(runs, (above, run) => {
    if (labels[starts[above]!] === labels[starts[run]!]) join(parents, above, run);
  });
  const patchOf = new Int32Array(starts.length);
  let count = 0;
  // A run hangs on one met before it, whose patch is known.
  for (let run = 0; run < starts.length; run++) patchOf[run] = parents[run] === run ? count++ : patchOf[parents[run]!]!;
  const sizes = new Int32Array(count);
  const patchLabels = new Uint8Array(count);
  for (let run = 0; run < starts.length; run++) {
    sizes[patchOf[run]!]! += ends[run]! - starts[run]!;
    patchLabels[patchOf[run]!] = labels[starts[run]!]!;
  }
  return { ...runs, patchOf, sizes, labels: patchLabels };
}

/** Calls `meet` for stretches of border between two patches, with their length in cell edges. */
export function eachPatchContact(runs: PatchRuns, meet: (patchA: number, patchB: number, edges: number) => void): void {
  const { cols, starts, ends, patchOf } = runs;
  for (let run = 0; run + 1 < starts.length; run++) if (ends[run] === starts[run + 1] && ends[run]! % cols !== 0) meet(patchOf[run]!, patchOf[run + 1]!, 1);
  eachTouching(runs, (above, run, edges) => {
    if (patchOf[above] !== patchOf[run]) meet(patchOf[above]!, patchOf[run]!, edges);
  });
}

function runsOf(labels: Labels, cols: number): Runs {
  const rows = labels.length / cols;
  const starts: number[] = [];
  const ends: number[] = [];
  const firstRun = new Int32Array(rows + 1);
  for (let row = 0, cell = 0; row < rows; row++) {
    firstRun[row] = starts.length;
    for (const rowEnd = cell + cols; cell < rowEnd; ) {
      const label = labels[cell]!;
      const start = cell++;
      while (cell < rowEnd && labels[cell] === label) cell++;
      if (label === 0) continue;
      starts.push(start);
      ends.push(cell);
    }
  }
  firstRun[rows] = starts.length;
  return { cols, starts, ends, firstRun };
}

/** Calls `meet` for each pair of runs of neighbouring rows that share cell edges: both rows are walked once, side by side. */
function eachTouching({ cols, starts, ends, firstRun }: Runs, meet: (above: number, run: number, edges: number) => void): void {
  for (let row = 1; row + 1 < firstRun.length; row++) {
    let above = firstRun[row - 1]!;
    let run = firstRun[row]!;
    while (above < firstRun[row]! && run < firstRun[row + 1]!) {
      const [endAbove, end] = [ends[above]! + cols, ends[run]!];
      const edges = Math.min(endAbove, end) - Math.max(starts[above]! + cols, starts[run]!);
      if (edges > 0) meet(above, run, edges);
      if (endAbove < end) above++;
      else run++;
    }
  }
}

/** The run met first stays the root, so that patches are numbered by their first cells. */
function join(parents: Int32Array, a: number, b: number): void {
  const [first, second] = [rootOf(parents, a), rootOf(parents, b)];
  if (first < second) parents[second] = first;
  else parents[first] = second;
}

function rootOf(parents: Int32Array, run: number): number {
  let at = run;
  while (parents[at] !== at) at = parents[at] = parents[parents[at]!]!;
  return at;
}
