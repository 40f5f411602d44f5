/** Labels as runs, for storing edits as plain records: [label, count, label, count …] in the order of the cells. */
import { AnalysisError } from './analysisError.ts';
import type { Labels } from './grid.ts';

/** `runsFromLabels` of 1, 1, 0, 2 is [1, 2, 0, 1, 2, 1]. */
export function runsFromLabels(labels: Labels): number[] {
  const runs: number[] = [];
  for (let cell = 0; cell < labels.length; cell++) {
    const label = labels[cell]!;
    if (runs.length > 0 && runs[runs.length - 2] === label) runs[runs.length - 1]!++;
    else runs.push(label, 1);
  }
  return runs;
}

/** Throws AnalysisError unless the runs fill exactly so many cells with labels 0…255. */
export function labelsFromRuns(runs: readonly number[], cellCount: number): Labels {
  const labels = new Uint8Array(cellCount);
  let at = 0;
  for (let run = 0; run < runs.length; run += 2) {
    const label = runs[run]!;
    const count = runs[run + 1] ?? NaN;
    const isSound = Number.isInteger(label) && label >= 0 && label <= 255 && Number.isInteger(count) && count >= 0 && at + count <= cellCount;
    if (!isSound) throw new AnalysisError('runs-damaged', `Stored zones cannot be read: run ${run / 2 + 1} does not fit ${cellCount} cells.`);
    labels.fill(label, at, at + count);
    at += count;
  }
  if (at !== cellCount) throw new AnalysisError('runs-damaged', `Stored zones cannot be read: they fill ${at} of ${cellCount} cells.`);
  return labels;
}
