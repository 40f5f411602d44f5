import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * Shares targets, in order of row and vine, among people: each gets a contiguous run, so that nobody walks another's rows.
 * In: the load of any run, which never falls when a target is added (exact closed walk in seconds plus time at the
 * vines). Out: cuts and loads. First the least possible largest load, by bisection with greedy longest runs; then the
 * smallest limit from there on, in steps of 1 %, under which all loads lie within 15 % of each other. Own rule; best only
 * among contiguous runs.
 */
export interface SplitInput {
  readonly targetCount: number;
  readonly people: number;
  /** Load of the targets `from` up to, not with, `to`. */
  readonly loadOf: (from: number, to: number) => number;
  /** Largest over smallest load that counts as even; default 1.15. */
  readonly evenness?: number;
}

export interface Split {
  /** A cut c means that a new run begins with target c. */
  readonly cuts: readonly number[];
  readonly loads: readonly number[];
  /** Whether the loads lie within the evenness asked for; otherwise the largest load is the least possible. */
  readonly isEven: boolean;
}

export function splitWalk(input: SplitInput): Split {
  const { targetCount, people, evenness = 1.15 } = input;
  if (!Number.isInteger(people) || people < 1) throw new AnalysisError('bad-count', `A walk cannot be shared among ${people} people; give a whole number from 1.`);
  if (people > targetCount) throw new AnalysisError('too-many-people', `Vines of the walk: ${targetCount}; people: ${people}; send at most ${targetCount}.`);
  const loadOf = remembered(input.loadOf);
  // The load of a large walk is dear, and there is nothing to search.
  if (people === 1) return { cuts: [], loads: [loadOf(0, targetCount)], isEven: true };
  const cuts = leastLargest({ ...input, loadOf });
  const loads = loadsOf(cuts, targetCount, loadOf);
  if (isWithin(loads, evenness)) return { cuts, loads, isEven: true };
  const most = loadOf(0, targetCount);
  for (let limit = Math.max(...loads); limit <= most; limit *= 1.01) {
    const even = cutsWithin({ ...input, loadOf }, limit / evenness, limit);
    if (even !== null) return { cuts: even, loads: loadsOf(even, targetCount, loadOf), isEven: true };
  }
  const fairest = largestLeast({ ...input, loadOf }, cuts);
  return { cuts: fairest, loads: loadsOf(fairest, targetCount, loadOf), isEven: false };
}

/** Each load of many targets takes tenths of a second: there the search ends within one percent of the least largest. */
const manyTargets = 250;

function leastLargest({ targetCount, people, loadOf }: SplitInput): number[] {
  const closeEnough = targetCount > manyTargets ? 0.01 : 1e-9;
  let high = loadOf(0, targetCount);
  // All walks and the ways back are a walk past all: together they take at least half of it, and the largest a fair share of that.
  let low = high / (2 * people) - 1e-9 * high;
  const fairShare = (1.02 * high) / people;
  let best = greedyCuts({ targetCount, people, loadOf }, high)!;
  for (let round = 0; round < 60 && high - low > closeEnough * high; round++) {
    const limit = round === 0 && fairShare < high ? fairShare : (low + high) / 2;
    const cuts = greedyCuts({ targetCount, people, loadOf }, limit);
    if (cuts === null) low = limit;
    else {
      best = cuts;
      high = Math.max(...loadsOf(cuts, targetCount, loadOf));
    }
  }
  return best;
}

/** Of the sharings with the same largest load, the one whose smallest load is largest. */
function largestLeast(input: SplitInput, cuts: readonly number[]): readonly number[] {
  const { targetCount, loadOf } = input;
  const limit = Math.max(...loadsOf(cuts, targetCount, loadOf));
  let best = cuts;
  let low = Math.min(...loadsOf(cuts, targetCount, loadOf));
  let high = limit;
  for (let round = 0; round < 60 && high - low > 1e-9 * high; round++) {
    const least = (low + high) / 2;
    const fairer = cutsWithin(input, least, limit);
    if (fairer === null) high = least;
    else {
      best = fairer;
      low = Math.min(...loadsOf(fairer, targetCount, loadOf));
    }
  }
  return best;
}

/** Runs as long as the limit allows, but leaving a target for everybody after; null when the people do not suffice. */
function greedyCuts({ targetCount, people, loadOf }: SplitInput, limit: number): number[] | null {
  const cuts: number[] = [];
  let from = 0;
  for (let person = 1; person <= people; person++) {
    const furthest = targetCount - (people - person);
    const to = longestRun(loadOf, { from, furthest, limit, targetCount });
    if (to === from) return null;
    if (person === people) return to === targetCount ? cuts : null;
    cuts.push(to);
    from = to;
  }
  return null;
}

/** The largest `to` with a load within the limit; `from` when not even one target is. Looks first where an even walk would come to, then farther and farther from there. */
function longestRun(loadOf: SplitInput['loadOf'], { from, furthest, limit, targetCount }: { from: number; furthest: number; limit: number; targetCount: number }): number {
  let [low, high, step] = [from, furthest, 1];
  let next = from + Math.round((limit * targetCount) / Math.max(loadOf(0, targetCount), Number.MIN_VALUE));
  while (low < high) {
    const tried = Math.min(high, Math.max(low + 1, next));
    const fits = loadOf(from, tried) <= limit;
    if (fits) low = tried;
    else high = tried - 1;
    next = low > from && high < furthest ? (low + high + 1) >> 1 : fits ? low + step : high - step;
    step *= 2;
  }
  return low;
}

/** Cuts with every load from `least` to `limit`, by the cut points that can be reached with 1, 2, 3 ... runs; null if none. */
function cutsWithin({ targetCount, people, loadOf }: SplitInput, least: number, limit: number): number[] | null {
  const cameFrom: Map<number, number>[] = [new Map([[0, -1]])];
  for (let person = 1; person <= people; person++) {
    const reached = new Map<number, number>();
    for (const from of cameFrom[person - 1]!.keys()) {
      const furthest = longestRun(loadOf, { from, furthest: targetCount, limit, targetCount });
      for (let to = furthest; to > from && loadOf(from, to) >= least; to--) reached.set(to, from);
    }
    cameFrom.push(reached);
  }
  const cuts: number[] = [];
  let at = targetCount;
  for (let person = people; person > 0; person--) {
    const from = cameFrom[person]!.get(at);
    if (from === undefined) return null;
    if (from > 0) cuts.unshift(from);
    at = from;
  }
  return cuts;
}

function loadsOf(cuts: readonly number[], targetCount: number, loadOf: SplitInput['loadOf']): number[] {
  return [...cuts, targetCount].map((to, i) => loadOf(cuts[i - 1] ?? 0, to));
}

function isWithin(loads: readonly number[], evenness: number): boolean {
  return Math.max(...loads) <= evenness * Math.min(...loads);
}

function remembered(loadOf: SplitInput['loadOf']): SplitInput['loadOf'] {
  const known = new Map<string, number>();
  return (from, to) => {
    const key = `${from}-${to}`;
    const load = known.get(key) ?? loadOf(from, to);
    known.set(key, load);
    return load;
  };
}
