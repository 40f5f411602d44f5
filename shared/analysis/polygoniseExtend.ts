/**
 * Labels carried a little beyond the block, so that zone borders cross the outline instead of ending at it.
 * In: labels on the grid. Out: labels on the grid with a rim of EXTENSION cells around it: every cell that touches the block
 * and those up to REACH cells beyond take the label of the nearest labelled cell by steps across edges; the rest is 0.
 */
import { AnalysisError } from './analysisError.ts';
import type { Grid, Labels } from './grid.ts';

export const EXTENSION = 4;
const REACH = 2;

export interface ExtendedLabels {
  readonly labels: Labels;
  readonly cols: number;
  readonly rows: number;
}

export function extendLabels(grid: Grid, labels: Labels): ExtendedLabels {
  const cols = grid.cols + 2 * EXTENSION;
  const rows = grid.rows + 2 * EXTENSION;
  const out = new Uint8Array(cols * rows);
  const isWanted = new Uint8Array(cols * rows);
  let wanted = 0;
  for (let row = 0; row < grid.rows; row++) {
    for (let col = 0; col < grid.cols; col++) {
      const cell = row * grid.cols + col;
      const at = (row + EXTENSION) * cols + col + EXTENSION;
      out[at] = grid.inside[cell] === 1 ? labels[cell]! : 0;
      if (grid.share[cell]! > 0) wanted += widen(isWanted, { at, cols, reach: isDeepInside(grid, col, row) ? 0 : REACH });
    }
  }
  spread(out, cols, (cell) => isWanted[cell] === 1);
  // A part of the block too small or too far to be reached from a labelled cell takes the nearest label over the gap.
  const reached = out.reduce((sum, label, cell) => sum + (label > 0 && isWanted[cell] === 1 ? 1 : 0), 0);
  if (reached === 0) throw new AnalysisError('labels-empty', 'No cell inside the block carries a zone.');
  if (reached < wanted) {
    const everywhere = new Uint8Array(out);
    spread(everywhere, cols, () => true);
    for (let cell = 0; cell < out.length; cell++) if (isWanted[cell] === 1) out[cell] = everywhere[cell]!;
  }
  return { labels: out, cols, rows };
}

/** True where all eight cells around touch the block too: the cells beyond are then reached from nearer the outline. */
function isDeepInside({ share, cols, rows }: Grid, col: number, row: number): boolean {
  if (col === 0 || row === 0 || col === cols - 1 || row === rows - 1) return false;
  const cell = row * cols + col;
  for (const middle of [cell - cols, cell, cell + cols]) if (share[middle - 1]! <= 0 || share[middle]! <= 0 || share[middle + 1]! <= 0) return false;
  return true;
}

/** Marks the square of cells around one; how many were new. */
function widen(isWanted: Uint8Array, { at, cols, reach }: { at: number; cols: number; reach: number }): number {
  let added = 0;
  for (let down = -reach; down <= reach; down++) {
    for (let right = -reach; right <= reach; right++) {
      const cell = at + down * cols + right;
      added += 1 - isWanted[cell]!;
      isWanted[cell] = 1;
    }
  }
  return added;
}

/** Breadth first from all labelled cells; of equally near labels the one of the lower cell index wins. */
function spread(labels: Labels, cols: number, isAllowed: (cell: number) => boolean): void {
  let front: number[] = [];
  for (let cell = cols; cell < labels.length - cols; cell++) {
    if (labels[cell]! > 0 && [cell - cols, cell - 1, cell + 1, cell + cols].some((near) => labels[near] === 0)) front.push(cell);
  }
  while (front.length > 0) {
    const next: number[] = [];
    for (const cell of front) {
      const col = cell % cols;
      for (const near of [cell - cols, col > 0 ? cell - 1 : -1, col < cols - 1 ? cell + 1 : -1, cell + cols]) {
        if (near < 0 || near >= labels.length || labels[near]! > 0 || !isAllowed(near)) continue;
        labels[near] = labels[cell]!;
        next.push(near);
      }
    }
    front = next;
  }
}
