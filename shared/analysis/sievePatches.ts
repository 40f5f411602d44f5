/**
 * Connected patches of equal labels. In: labels, 0 outside. Out: a patch number per cell, -1 outside, numbered in the order
 * of their first cell. Cost: every cell once (flood fill with a stack).
 */
import type { Labels } from './grid.ts';

/** 4: cells that share an edge are together. 8: cells that share a corner too. */
export type Connectivity = 4 | 8;

export interface Patches {
  readonly patchOf: Int32Array;
  /** Cells and label of each patch. */
  readonly sizes: Int32Array;
  readonly labels: Uint8Array;
}

const STEPS: Record<Connectivity, readonly (readonly [col: number, row: number])[]> = {
  4: [[0, -1], [-1, 0], [1, 0], [0, 1]],
  8: [[-1, -1], [0, -1], [1, -1], [-1, 0], [1, 0], [-1, 1], [0, 1], [1, 1]],
};

/** Rows `112` / `122` hold two patches of three cells. */
export function findPatches(labels: Labels, cols: number, connectivity: Connectivity = 4): Patches {
  const patchOf = new Int32Array(labels.length).fill(-1);
  const sizes: number[] = [];
  const patchLabels: number[] = [];
  const stack = new Int32Array(labels.length);
  const right = Int32Array.from(STEPS[connectivity], ([col]) => col);
  const offset = Int32Array.from(STEPS[connectivity], ([col, row]) => col + row * cols);
  for (let first = 0; first < labels.length; first++) {
    const label = labels[first]!;
    if (label === 0 || patchOf[first] !== -1) continue;
    const patch = sizes.length;
    let depth = 0;
    let size = 0;
    stack[depth++] = first;
    patchOf[first] = patch;
    while (depth > 0) {
      const cell = stack[--depth]!;
      size++;
      const col = cell % cols;
      for (let step = 0; step < right.length; step++) {
        const nextCol = col + right[step]!;
        if (nextCol < 0 || nextCol >= cols) continue;
        const next = cell + offset[step]!;
        if (labels[next] !== label || patchOf[next] !== -1) continue;
        patchOf[next] = patch;
        stack[depth++] = next;
      }
    }
    sizes.push(size);
    patchLabels.push(label);
  }
  return { patchOf, sizes: Int32Array.from(sizes), labels: Uint8Array.from(patchLabels) };
}

/** Calls `meet` for each pair of neighbouring cells of different patches; `isEdge` is false for pairs that share a corner only. */
export function eachContact(patches: Patches, cols: number, connectivity: Connectivity, meet: (patchA: number, patchB: number, isEdge: boolean) => void): void {
  const { patchOf } = patches;
  const visit = (a: number, b: number, isEdge: boolean) => {
    if (a !== b && a !== -1 && b !== -1) meet(a, b, isEdge);
  };
  const rows = patchOf.length / cols;
  for (let row = 0, cell = 0; row < rows; row++) {
    const below = row + 1 < rows;
    for (let col = 0; col < cols; col++, cell++) {
      const patch = patchOf[cell]!;
      if (patch === -1) continue;
      if (col + 1 < cols) visit(patch, patchOf[cell + 1]!, true);
      if (below) visit(patch, patchOf[cell + cols]!, true);
      if (connectivity === 4 || !below) continue;
      if (col + 1 < cols) visit(patch, patchOf[cell + cols + 1]!, false);
      if (col > 0) visit(patch, patchOf[cell + cols - 1]!, false);
    }
  }
}
