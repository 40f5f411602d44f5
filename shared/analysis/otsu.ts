/**
 * Threshold between two kinds of pixels, from a histogram: the one with the greatest variance between the two classes.
 * Source: N. Otsu, A threshold selection method from gray-level histograms, IEEE Trans. SMC 9 (1979), 62–66.
 */

export interface OtsuThreshold {
  /** Last bin of the lower class. */
  readonly bin: number;
  /** Between-class over total variance, 0…1: Otsu's measure of how apart the classes are. */
  readonly separability: number;
}

/**
 * Null where fewer than two bins are filled. Counts 5 0 0 5: bin 1, separability 1. Where several thresholds are equally
 * good, as over a gap, the middle one is taken, so that neither class loses its next pixel.
 */
export function otsuThreshold(counts: ArrayLike<number>): OtsuThreshold | null {
  let [total, sum, squares] = [0, 0, 0];
  for (let bin = 0; bin < counts.length; bin++) {
    total += counts[bin]!;
    sum += bin * counts[bin]!;
    squares += bin * bin * counts[bin]!;
  }
  const variance = squares / total - (sum / total) ** 2;
  if (!(total > 0) || !(variance > 1e-12)) return null;
  let [below, sumBelow, best, first, last] = [0, 0, -1, 0, 0];
  for (let bin = 0; bin < counts.length - 1; bin++) {
    below += counts[bin]!;
    sumBelow += bin * counts[bin]!;
    if (below === 0 || below === total) continue;
    const between = (below / total) * (1 - below / total) * (sumBelow / below - (sum - sumBelow) / (total - below)) ** 2;
    if (between > best * (1 + 1e-12)) [best, first] = [between, bin];
    if (between >= best * (1 - 1e-12)) last = bin;
  }
  return { bin: Math.floor((first + last) / 2), separability: Math.min(1, best / variance) };
}
