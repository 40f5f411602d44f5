/**
 * Counts made cheaper step by step while every limit still holds: a sample or two are taken from a zone, and where that
 * breaks a limit, samples are given to others, each where it mends most for its cost, as long as the whole stays cheaper;
 * or one is given to a zone, and others spare what they can.
 * For limits that move with the counts (Student's t), which the least-cost programme can only hold fixed. Own rule;
 * against every set of counts: tests/core/planAssumptions.test.ts.
 */
export interface CheaperAsk {
  readonly costs: readonly number[];
  readonly minimum: readonly number[];
  readonly maximum: readonly number[];
  /** About what share of its limit the tightest margin uses; only says where a sample is missed least, so it may be rough and must be quick. */
  readonly used: (counts: readonly number[]) => number;
  /** Whether every limit holds. */
  readonly keeps: (counts: readonly number[]) => boolean;
}

/** Roundings of equal counts are not worth a step. */
const WORTH = 1 - 1e-9;
const MOST_STEPS = 400;

export function cheaperCounts(start: readonly number[], ask: CheaperAsk): number[] {
  let counts = [...start];
  for (let step = 0; step < MOST_STEPS; step++) {
    const better = cheaperNeighbour(counts, ask);
    if (better === null) break;
    counts = better;
  }
  return counts;
}

function cheaperNeighbour(counts: readonly number[], ask: CheaperAsk): number[] | null {
  const { costs, minimum } = ask;
  const dearestFirst = costs.map((_, i) => i).sort((a, b) => costs[b]! - costs[a]!);
  const cost = costOf(costs, counts);
  for (const fewer of [1, 2, 3])
    for (const zone of dearestFirst) {
      if (counts[zone]! - fewer < minimum[zone]!) continue;
      const changed = counts.map((n, i) => (i === zone ? n - fewer : n));
      const mended = mendedBelow(changed, { ...ask, apart: zone, below: cost * WORTH });
      if (mended !== null) return mended;
    }
  for (const zone of dearestFirst) {
    if (counts[zone]! >= ask.maximum[zone]!) continue;
    const spared = sparedAround(counts.map((n, i) => (i === zone ? n + 1 : n)), { ...ask, apart: zone });
    if (costOf(costs, spared) < cost * WORTH) return spared;
  }
  return null;
}

/** Samples taken away outside zone `apart` while the limits hold, each where it is missed least for its cost. */
function sparedAround(counts: number[], { costs, minimum, used, keeps, apart }: CheaperAsk & { apart: number }): number[] {
  const without = (zone: number) => counts.map((n, i) => (i === zone ? n - 1 : n));
  for (;;) {
    const now = used(counts);
    const open = costs.map((_, i) => i).filter((i) => i !== apart && counts[i]! > minimum[i]!);
    const losses = new Map(open.map((i) => [i, (used(without(i)) - now) / costs[i]!]));
    const next = open.sort((a, b) => losses.get(a)! - losses.get(b)!).find((i) => keeps(without(i)));
    if (next === undefined) return counts;
    counts[next]! -= 1;
  }
}

/** Samples added, each time where they mend most for their cost, until every limit holds; null where even the maximum breaks one. */
export function grownCounts(start: readonly number[], { costs, maximum, used, keeps }: CheaperAsk): number[] | null {
  const counts = [...start];
  while (!keeps(counts)) {
    const open = costs.map((_, i) => i).filter((i) => counts[i]! < maximum[i]!);
    if (open.length === 0) return null;
    const now = used(counts);
    const gains = open.map((i) => (now - used(counts.map((n, k) => (k === i ? n + 1 : n)))) / costs[i]!);
    const best = open[Math.max(0, gains.indexOf(Math.max(...gains)))]!;
    // A thirtieth at once of many: what that is too much is taken away again in `cheaperCounts`.
    counts[best] = Math.min(maximum[best]!, counts[best]! + 1 + Math.floor(counts[best]! / 30));
  }
  return counts;
}

/** Samples added outside zone `apart` until the limits hold; null when that costs too much. */
function mendedBelow(counts: number[], ask: CheaperAsk & { apart: number; below: number }): number[] | null {
  const { costs, maximum, used, keeps, apart, below } = ask;
  while (!keeps(counts)) {
    const now = used(counts);
    let best = -1;
    let bestGain = 0;
    counts.forEach((n, i) => {
      if (i === apart || n >= maximum[i]! || costOf(costs, counts) + costs[i]! >= below) return;
      counts[i] = n + 1;
      const after = used(counts);
      counts[i] = n;
      const gain = (now - after) / costs[i]!;
      if (gain > bestGain) [best, bestGain] = [i, gain];
    });
    if (best < 0) return null;
    counts[best]! += 1;
  }
  return costOf(costs, counts) < below ? counts : null;
}

function costOf(costs: readonly number[], counts: readonly number[]): number {
  let sum = 0;
  for (let i = 0; i < costs.length; i++) sum += costs[i]! * counts[i]!;
  return sum;
}
