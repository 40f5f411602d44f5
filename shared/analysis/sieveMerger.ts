/**
 * Merges patches that are too small into their neighbours: borders as a graph, sizes in buckets, so that the smallest
 * patch is always at hand. Cost: the total length of the neighbour lists of the patches that are merged.
 */
import type { Patches } from './sievePatches.ts';

export class PatchMerger {
  private readonly borders: Map<number, number>[];
  private readonly mergedInto: Int32Array;
  private readonly sizes: Int32Array;
  private readonly labels: Uint8Array;
  private readonly minCells: number;

  constructor(patches: Pick<Patches, 'sizes' | 'labels'>, minCells: number) {
    this.borders = Array.from(patches.sizes, () => new Map<number, number>());
    this.mergedInto = Int32Array.from(patches.sizes.keys());
    this.sizes = new Int32Array(patches.sizes);
    this.labels = new Uint8Array(patches.labels);
    this.minCells = minCells;
  }

  /** Notes that two patches meet along `length` cell edges; 0 for a corner. */
  addBorder(a: number, b: number, length: number): void {
    this.borders[a]!.set(b, (this.borders[a]!.get(b) ?? 0) + length);
    this.borders[b]!.set(a, (this.borders[b]!.get(a) ?? 0) + length);
  }

  /** Merges every patch below the minimum that has a neighbour; the label of each original patch afterwards. */
  mergeSmall(): Uint8Array {
    const buckets: number[][] = Array.from({ length: Math.max(0, this.minCells) }, () => []);
    for (let patch = 0; patch < this.sizes.length; patch++) buckets[this.sizes[patch]!]?.push(patch);
    // A merged patch is larger than the one that is at hand, so it never lands in a bucket already passed.
    buckets.forEach((bucket, size) => {
      for (let at = 0; at < bucket.length; at++) {
        const patch = bucket[at]!;
        if (this.mergedInto[patch] !== patch || this.sizes[patch] !== size) continue;
        const target = this.bestNeighbour(patch);
        if (target === -1) continue;
        const whole = this.join(patch, target);
        buckets[this.sizes[whole]!]?.push(whole);
      }
    });
    return this.labels.map((_, patch) => this.labels[this.rootOf(patch)]!);
  }

  private bestNeighbour(patch: number): number {
    let best = -1;
    let bestLength = -1;
    for (const [other, length] of this.borders[patch]!) {
      if (best === -1 || length > bestLength || (length === bestLength && this.isPreferred(other, best))) {
        best = other;
        bestLength = length;
      }
    }
    return best;
  }

  private isPreferred(a: number, b: number): boolean {
    if (this.sizes[a] !== this.sizes[b]) return this.sizes[a]! > this.sizes[b]!;
    return this.labels[a] === this.labels[b] ? a < b : this.labels[a]! < this.labels[b]!;
  }

  /** Gives a patch its neighbour's label, which also joins it to its other neighbours of that label. */
  private join(patch: number, target: number): number {
    const label = this.labels[target]!;
    const alike = [...this.borders[patch]!.keys()].filter((other) => this.labels[other] === label);
    return alike.reduce((whole, other) => this.unite(whole, other), patch);
  }

  /** Moves the shorter list of borders into the longer one. */
  private unite(a: number, b: number): number {
    const [into, from] = this.borders[a]!.size > this.borders[b]!.size ? [a, b] : [b, a];
    this.labels[into] = this.labels[b]!;
    this.sizes[into]! += this.sizes[from]!;
    this.mergedInto[from] = into;
    for (const [other, length] of this.borders[from]!) {
      this.borders[other]!.delete(from);
      if (other !== into) this.addBorder(into, other, length);
    }
    this.borders[from]!.clear();
    return into;
  }

  private rootOf(patch: number): number {
    let root = patch;
    while (this.mergedInto[root] !== root) root = this.mergedInto[root]!;
    return root;
  }
}
