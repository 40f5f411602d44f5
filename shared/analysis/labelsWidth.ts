/**
 * Is a zone wide enough for a machine to work in? Share of each zone that a disc of the wanted width can reach
 * (morphological opening, Serra 1982), all zones in one pass. Cost: cells on zone borders × cells in the disc.
 */
import { cellsPerLabel } from './labels.ts';
import type { Labels } from './grid.ts';

/**
 * Share, 0…1, of the cells of each label that lie in a disc of diameter `widthM` which fits into the zone; by label,
 * NaN for a label not in use. The block's edge does not narrow a zone: only other zones do. Discs stand on cell centres,
 * so widths are judged to one cell, in the zone's favour: a strip of two cells is wide enough for two cells.
 */
export function wideShare(labels: Labels, cols: number, width: Width): Float64Array {
  const isReached = wideCells(labels, cols, width);
  const counts = cellsPerLabel(labels);
  const reached = cellsPerLabel(labels.map((label, cell) => (isReached[cell] === 1 ? label : 0)));
  return Float64Array.from(counts, (count, label) => (label === 0 || count === 0 ? NaN : (reached[label] ?? 0) / count));
}

export interface Width {
  readonly widthM: number;
  readonly cellSizeM: number;
}

/** 1 where a disc of the width that fits into the cell's zone reaches the cell. */
export function wideCells(labels: Labels, cols: number, { widthM, cellSizeM }: Width): Uint8Array {
  const radius = widthM / 2 / cellSizeM;
  const isCore = new Uint8Array(labels.length).fill(1);
  const tooNear = discOffsets(radius - 1e-9);
  eachRim(labels, cols, (cell, own) => stamp(tooNear, cell, { labels, cols }, (near) => {
    if (labels[near] !== own) isCore[near] = 0;
  }));
  const core = labels.map((label, cell) => (isCore[cell] === 1 ? label : 0));
  const isReached = new Uint8Array(isCore);
  const disc = discOffsets(radius);
  eachRim(core, cols, (cell, own) => stamp(disc, cell, { labels, cols }, (near) => {
    if (labels[near] === own) isReached[near] = 1;
  }));
  return isReached;
}

/** Whether every label in use has a place, somewhere, where a disc of the width fits in; judged as `wideShare` does. Cost: little, since wide zones are found at once. */
export function allReachWidth(labels: Labels, cols: number, { widthM, cellSizeM }: Width): boolean {
  const offsets = discOffsets(widthM / 2 / cellSizeM - 1e-9);
  const isOther = (own: number) => (near: number) => labels[near] !== 0 && labels[near] !== own;
  const sought = new Set(labels);
  sought.delete(0);
  for (let cell = 0; cell < labels.length && sought.size > 0; cell++) {
    const own = labels[cell]!;
    if (own !== 0 && sought.has(own) && !someNear(offsets, cell, { labels, cols }, isOther(own))) sought.delete(own);
  }
  return sought.size === 0;
}

/** Calls `visit` for each cell with a label that has a cell of another value, 0 included, among its eight neighbours. */
function eachRim(labels: Labels, cols: number, visit: (cell: number, label: number) => void): void {
  const rows = labels.length / cols;
  for (let cell = 0; cell < labels.length; cell++) {
    const own = labels[cell]!;
    if (own === 0) continue;
    const col = cell % cols;
    const row = (cell - col) / cols;
    let isRim = false;
    for (let r = Math.max(0, row - 1); r <= Math.min(rows - 1, row + 1) && !isRim; r++) {
      for (let c = Math.max(0, col - 1); c <= Math.min(cols - 1, col + 1); c++) if (labels[r * cols + c] !== own) isRim = true;
    }
    if (isRim) visit(cell, own);
  }
}

function discOffsets(radius: number): (readonly [right: number, down: number])[] {
  const offsets: (readonly [number, number])[] = [];
  const reach = Math.floor(radius);
  for (let down = -reach; down <= reach; down++) {
    for (let right = -reach; right <= reach; right++) if (right * right + down * down <= radius * radius) offsets.push([right, down]);
  }
  return offsets;
}

function stamp(offsets: readonly (readonly [number, number])[], cell: number, { labels, cols }: { labels: Labels; cols: number }, mark: (cell: number) => void): void {
  someNear(offsets, cell, { labels, cols }, (near) => {
    mark(near);
    return false;
  });
}

/** Whether one of the cells near by, of those on the grid, is as asked; the others are not looked at then. */
function someNear(offsets: readonly (readonly [number, number])[], cell: number, { labels, cols }: { labels: Labels; cols: number }, isAsAsked: (cell: number) => boolean): boolean {
  const col = cell % cols;
  for (const [right, down] of offsets) {
    const near = cell + right + down * cols;
    if (col + right >= 0 && col + right < cols && near >= 0 && near < labels.length && isAsAsked(near)) return true;
  }
  return false;
}
