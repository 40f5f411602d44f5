/**
 * Quantile of sorted values by linear interpolation between order statistics, position 1 + (n − 1)p: definition 7 of
 * Hyndman & Fan 1996, the default of R and numpy. NaN for no values. `quantileOfSorted([1, 2, 3, 4], 0.5)` is 2.5.
 */
export function quantileOfSorted(sorted: ArrayLike<number>, share: number): number {
  if (sorted.length === 0) return NaN;
  const position = (sorted.length - 1) * Math.min(1, Math.max(0, share));
  const below = Math.floor(position);
  const low = sorted[below]!;
  const high = sorted[Math.min(sorted.length - 1, below + 1)]!;
  return low + (high - low) * (position - below);
}
