/**
 * Quantiles by linear interpolation between order statistics, position 1 + (n − 1)p: definition 7 of Hyndman & Fan 1996,
 * the default of R and numpy. NaN for no values.
 */

/** From values in ascending order. `quantileOfSorted([1, 2, 3, 4], 0.5)` is 2.5. */
export function quantileOfSorted(sorted: ArrayLike<number>, share: number): number {
  if (sorted.length === 0) return NaN;
  const { below, part } = placeOf(sorted.length, share);
  const low = sorted[below]!;
  return part === 0 ? low : low + (sorted[below + 1]! - low) * part;
}

/**
 * From values in any order, without NaN, for shares in ascending order; the values are not changed. Selects instead of
 * sorting (Hoare 1961, FIND), so the cost is linear in the values.
 */
export function quantilesOf(values: Float32Array, shares: readonly number[]): number[] {
  const work = values.slice();
  let from = 0;
  return shares.map((share) => {
    if (work.length === 0) return NaN;
    const { below, part } = placeOf(work.length, share);
    select(work, from, below);
    from = below;
    if (part === 0) return work[below]!;
    let next = Infinity;
    for (let at = below + 1; at < work.length; at++) if (work[at]! < next) next = work[at]!;
    return work[below]! + (next - work[below]!) * part;
  });
}

function placeOf(count: number, share: number): { below: number; part: number } {
  const position = (count - 1) * Math.min(1, Math.max(0, share));
  const below = Math.floor(position);
  return { below, part: position - below };
}

/** Orders `values` so that place `wanted` holds what it would after sorting, no larger ones before and no smaller ones after it. */
function select(values: Float32Array, first: number, wanted: number): void {
  let from = first;
  let to = values.length - 1;
  while (from < to) {
    const pivot = middleOfThree(values[from]!, values[(from + to) >> 1]!, values[to]!);
    let left = from;
    let right = to;
    while (left <= right) {
      while (values[left]! < pivot) left++;
      while (values[right]! > pivot) right--;
      if (left > right) break;
      const held = values[left]!;
      values[left++] = values[right]!;
      values[right--] = held;
    }
    if (wanted <= right) to = right;
    else if (wanted >= left) from = left;
    else return;
  }
}

function middleOfThree(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}
