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

/**
 * Last bins of the lower two of three classes with the greatest variance between them; null where fewer than three bins are
 * filled. The sum of (sum of class)² / (number of class) is greatest where that variance is (Liao, Chen and Chung 2001).
 */
export function otsuTwoThresholds(counts: ArrayLike<number>): readonly [low: number, high: number] | null {
  const [number, sum] = [new Float64Array(counts.length + 1), new Float64Array(counts.length + 1)];
  for (let bin = 0; bin < counts.length; bin++) {
    number[bin + 1] = number[bin]! + counts[bin]!;
    sum[bin + 1] = sum[bin]! + bin * counts[bin]!;
  }
  const filled: number[] = [];
  for (let bin = 0; bin < counts.length; bin++) if (counts[bin]! > 0) filled.push(bin);
  if (filled.length < 3) return null;
  const part = (from: number, to: number) => (sum[to]! - sum[from]!) ** 2 / (number[to]! - number[from]!);
  let [best, low, high] = [-1, 0, 0];
  for (let i = 0; i < filled.length - 2; i++) {
    const lower = part(0, filled[i]! + 1);
    for (let j = i + 1; j < filled.length - 1; j++) {
      const between = lower + part(filled[i]! + 1, filled[j]! + 1) + part(filled[j]! + 1, counts.length);
      if (between > best) [best, low, high] = [between, i, j];
    }
  }
  // Over a gap the middle, so that neither class loses its next pixel.
  const middle = (at: number) => Math.floor((filled[at]! + filled[at + 1]! - 1) / 2);
  return [middle(low), middle(high)];
}

/** Bins a side that are averaged before humps and valleys are looked for. */
const SMOOTHED = 8;

/**
 * How full the valley between the humps of two classes is, as a share of the lower hump: 0 where nothing lies between them, 1
 * where the threshold cuts one hump. Classes are the bins above the first, up to the second, and up to the third bound.
 */
export function valleyBetween(counts: ArrayLike<number>, [from, at, to]: readonly [number, number, number]): number {
  const smooth = (bin: number): number => {
    let sum = 0;
    for (let other = Math.max(0, bin - SMOOTHED); other <= Math.min(counts.length - 1, bin + SMOOTHED); other++) sum += counts[other]!;
    return sum;
  };
  const peak = (first: number, last: number): readonly [bin: number, height: number] => {
    let [bin, height] = [first, -1];
    for (let each = first; each <= last; each++) if (smooth(each) > height) [bin, height] = [each, smooth(each)];
    return [bin, height];
  };
  const [[left, leftHeight], [right, rightHeight]] = [peak(from + 1, at), peak(at + 1, to)];
  let least = Math.min(leftHeight, rightHeight);
  const lower = least;
  for (let bin = left; bin <= right; bin++) least = Math.min(least, smooth(bin));
  return lower > 0 ? least / lower : 1;
}
