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
  for (let row = 0; row < grid.rows; row++) {
    const from = (row + EXTENSION) * cols + EXTENSION;
    for (let col = 0; col < grid.cols; col++) {
      const cell = row * grid.cols + col;
      if (grid.inside[cell] === 1) out[from + col] = labels[cell]!;
      if (grid.share[cell]! > 0) isWanted[from + col] = 1;
    }
  }
  widenByReach(isWanted, cols);
  spread(out, cols, (cell) => isWanted[cell] === 1);
  fillUnreached(out, isWanted, cols);
  return { labels: out, cols, rows };
}

/** A part of the block too small or too far to be reached from a labelled cell takes the nearest label over the gap. */
function fillUnreached(labels: Labels, isWanted: Uint8Array, cols: number): void {
  let isAnyLabelled = false;
  let isAnyMissing = false;
  for (let cell = 0; cell < labels.length; cell++) {
    if (labels[cell]! > 0) isAnyLabelled = true;
    else if (isWanted[cell] === 1) isAnyMissing = true;
  }
  if (!isAnyLabelled) throw new AnalysisError('labels-empty', 'No cell inside the block carries a zone.');
  if (!isAnyMissing) return;
  const everywhere = new Uint8Array(labels);
  spread(everywhere, cols, () => true);
  for (let cell = 0; cell < labels.length; cell++) if (isWanted[cell] === 1) labels[cell] = everywhere[cell]!;
}

/** Marks all cells up to REACH columns and rows from a marked one: ring by ring, from the cells at the edge. */
function widenByReach(isMarked: Uint8Array, cols: number): void {
  for (let ring = 0; ring < REACH; ring++) {
    const added: number[] = [];
    for (let cell = cols + 1; cell < isMarked.length - cols - 1; cell++) {
      if (isMarked[cell] === 1) continue;
      const north = cell - cols;
      const south = cell + cols;
      const beside = isMarked[cell - 1]! | isMarked[cell + 1]!;
      const above = isMarked[north - 1]! | isMarked[north]! | isMarked[north + 1]!;
      const below = isMarked[south - 1]! | isMarked[south]! | isMarked[south + 1]!;
      if ((beside | above | below) === 1) added.push(cell);
    }
    for (const cell of added) isMarked[cell] = 1;
  }
}

/** Breadth first from all labelled cells; of equally near labels the one of the lower cell index wins. */
function spread(labels: Labels, cols: number, isAllowed: (cell: number) => boolean): void {
  let front: number[] = [];
  for (let cell = cols; cell < labels.length - cols; cell++) {
    const isAtEdge = labels[cell - cols] === 0 || labels[cell - 1] === 0 || labels[cell + 1] === 0 || labels[cell + cols] === 0;
    if (labels[cell]! > 0 && isAtEdge) front.push(cell);
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
