/**
 * Removes patches that are too small to work with. In: labels, 0 outside. Out: labels; no cell becomes or leaves 0.
 * Cost: linear in the cells, plus the merging of small patches.
 */
import type { Labels } from './grid.ts';
import { PatchMerger } from './sieveMerger.ts';
import { eachContact, findPatches, type Connectivity, type Patches } from './sievePatches.ts';
import { eachPatchContact, patchRuns } from './sieveRuns.ts';

export interface SieveOptions {
  /** Patches with fewer cells than this are removed. */
  readonly minCells: number;
  readonly connectivity?: Connectivity;
}

/** Cells that an area needs, rounded up: 0.05 ha at 2 m are 125 cells. */
export function cellsForArea(areaHa: number, cellSizeM: number): number {
  return Math.max(0, Math.ceil((areaHa * 10_000) / (cellSizeM * cellSizeM) - 1e-9));
}

/**
 * A small patch takes the label of the neighbour patch with the longest shared border, smallest patches first, until none
 * is left or a patch has no neighbour. Ties go to the larger neighbour, then to the lower label. Own rule for zones: the
 * longest border moves the least line on the ground.
 */
export function sieveByBorder(labels: Labels, cols: number, { minCells }: Pick<SieveOptions, 'minCells'>): Labels {
  const runs = patchRuns(labels, cols);
  const { sizes, patchOf, starts, ends } = runs;
  const out = new Uint8Array(labels);
  if (!sizes.some((size) => size < minCells)) return out;
  const merger = new PatchMerger(runs, minCells);
  eachPatchContact(runs, (a, b, edges) => {
    // Only small patches ask for their neighbours; what two large ones share is never looked at.
    if (sizes[a]! < minCells || sizes[b]! < minCells) merger.addBorder(a, b, edges);
  });
  const labelOf = merger.mergeSmall();
  for (let run = 0; run < starts.length; run++) {
    const patch = patchOf[run]!;
    if (labelOf[patch] !== runs.labels[patch]) out.fill(labelOf[patch]!, starts[run], ends[run]);
  }
  return out;
}

/**
 * The sieve of the geographic libraries: a small patch takes the label of its largest neighbour patch; if that is small
 * too, the largest neighbour of that one, and so on. Sizes are those before any merging. Ties go to the patch met first.
 */
export function sieveByLargestNeighbour(labels: Labels, cols: number, { minCells, connectivity = 4 }: SieveOptions): Labels {
  const patches = findPatches(labels, cols, connectivity);
  const { sizes } = patches;
  const largest = new Int32Array(sizes.length).fill(-1);
  const offer = (patch: number, other: number) => {
    if (largest[patch] === -1 || sizes[other]! > sizes[largest[patch]!]!) largest[patch] = other;
  };
  eachContact(patches, cols, connectivity, (a, b) => {
    offer(a, b);
    offer(b, a);
  });
  const labelOf = patches.labels.map((own, patch) => {
    const visited = new Set<number>();
    let at = patch;
    while (at !== -1 && sizes[at]! < minCells && !visited.has(at)) {
      visited.add(at);
      at = largest[at]!;
    }
    return at === -1 || sizes[at]! < minCells ? own : patches.labels[at]!;
  });
  return labelsOfPatches(patches, labelOf);
}

function labelsOfPatches({ patchOf }: Patches, labelOf: Uint8Array): Labels {
  const out = new Uint8Array(patchOf.length);
  for (let cell = 0; cell < out.length; cell++) if (patchOf[cell] !== -1) out[cell] = labelOf[patchOf[cell]!]!;
  return out;
}

export interface SmallPatch {
  readonly label: number;
  readonly cells: number;
  /** A cell of the patch, to show the place. */
  readonly firstCell: number;
}

/** Patches below the minimum, in the order of their first cell: what a hand edit has left that is too small to work with. */
export function smallPatches(labels: Labels, cols: number, { minCells, connectivity = 4 }: SieveOptions): SmallPatch[] {
  const { patchOf, sizes, labels: patchLabels } = findPatches(labels, cols, connectivity);
  return Array.from(sizes.keys())
    .filter((patch) => sizes[patch]! < minCells)
    .map((patch) => ({ label: patchLabels[patch]!, cells: sizes[patch]!, firstCell: patchOf.indexOf(patch) }));
}
