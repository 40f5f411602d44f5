import { AnalysisError } from '../analysis/analysisError.ts';
import { costOf, maximumOf, minimumOf, type AllocationZone } from './allocate.ts';

/**
 * A total of samples shared over zones in whole numbers: each sample goes where its worth is largest, the first of equals
 * winning. Worth falls with every sample a zone has, so most are given at once, down to a level of worth that all of them
 * exceed, and only the last few one by one.
 */
interface Worth {
  /** Of the next sample of zone `i` when it has `n`. */
  readonly of: (i: number, n: number) => number;
  /** Samples of zone `i` whose worth exceeds a level that falls as `depth` grows, to within one. */
  readonly taken: (i: number, depth: number) => number;
}

/**
 * Whole numbers with the smallest variance for a total: every zone starts at its minimum, then each sample goes to
 * the largest N·S/√(n(n+1)) (Wright 2012, The American Statistician 66:217). With `byCost` the square of that priority is
 * divided by the zone's cost.
 */
export function exactCounts(zones: readonly AllocationZone[], total: number, { byCost = false } = {}): number[] {
  const weights = zones.map((zone) => (zone.vines * zone.sd) ** 2);
  const costs = zones.map((zone) => (byCost ? costOf(zone) : 1));
  const roots = weights.map((weight, i) => Math.sqrt(weight / costs[i]!));
  return share(zones, total, {
    of: (i, n) => (n === 0 ? Infinity : weights[i]! / (n * (n + 1)) / costs[i]!),
    taken: (i, depth) => roots[i]! * depth,
  });
}

/** Whole numbers as near as possible to unrounded shares within each zone's minimum and maximum. */
export function nearestCounts(zones: readonly AllocationZone[], shares: readonly number[], total: number): number[] {
  const reach = Math.max(...zones.map(maximumOf));
  return share(zones, total, { of: (i, n) => shares[i]! - n, taken: (i, depth) => shares[i]! - reach + depth });
}

function share(zones: readonly AllocationZone[], total: number, worth: Worth): number[] {
  const minimum = startAtMinimum(zones, total);
  const maximum = zones.map(maximumOf);
  const counts = mostAtOnce({ minimum, maximum, total, worth });
  let left = total - sumOf(counts);
  while (left > 0) {
    let best = -1;
    let most = -Infinity;
    for (let i = 0; i < counts.length; i++) {
      if (counts[i]! >= maximum[i]!) continue;
      const next = worth.of(i, counts[i]!);
      if (best < 0 || next > most) [best, most] = [i, next];
    }
    if (best < 0) break;
    counts[best]! += 1;
    left -= 1;
  }
  return counts;
}

/** The minimum of every zone, or a sentence when the total cannot hold them: raising it silently would hide the cost. */
function startAtMinimum(zones: readonly AllocationZone[], total: number): number[] {
  const counts = zones.map(minimumOf);
  const needed = counts.reduce((sum, n) => sum + n, 0);
  if (needed > total) {
    throw new AnalysisError('total_below_minimum', `${zones.length} zones need at least ${needed} samples in all to keep their minimum; ${total} were asked for. Allow ${needed} or fewer zones.`);
  }
  return counts;
}

/** Fewer steps than this are not worth halving for. */
const FEW = 40;
const HALVINGS = 60;

/**
 * Counts that no zone ends below: the samples whose worth exceeds a level at which all such samples together fit in the
 * total, two fewer in each zone so that rounding cannot matter.
 */
function mostAtOnce({ minimum, maximum, total, worth }: { minimum: readonly number[]; maximum: readonly number[]; total: number; worth: Worth }): number[] {
  const at = (depth: number, more: number) => minimum.map((least, i) => Math.max(least, Math.min(maximum[i]!, Math.floor(worth.taken(i, depth)) + more)));
  const fits = (depth: number) => sumOf(at(depth, 1)) <= total;
  // A zone without a sample comes before all others, whatever its worth.
  if (minimum.includes(0) || total - sumOf(minimum) < FEW || !fits(0)) return [...minimum];
  let [low, high] = [0, 1];
  for (let i = 0; i < HALVINGS && fits(high); i++) [low, high] = [high, high * 2];
  for (let i = 0; i < HALVINGS && high - low > 1e-4 * high; i++) {
    const middle = (low + high) / 2;
    if (fits(middle)) low = middle;
    else high = middle;
  }
  return at(low, -2);
}

function sumOf(counts: readonly number[]): number {
  return counts.reduce((sum, n) => sum + n, 0);
}
