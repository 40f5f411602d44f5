/**
 * Whole-number sample counts of least cost under several precision limits at once:
 *   minimise Σ c·n   subject to   Σ A_j/n ≤ U_j for every measure j,   lo ≤ n ≤ hi, whole.
 * The relaxed problem is convex (Kokan & Khan 1967, J. R. Statist. Soc. B 29:115); its multipliers come from the
 * iteration of Chromy 1987. They give a lower bound and a price for every count of every zone; a search over the
 * counts whose prices fit between bound and best answer is then exhaustive, so the answer is exact.
 * Cost: some thousand nodes for five zones and six measures; cut off at 40 000, a few hundredths of a second.
 */
export interface LeastCostProblem {
  readonly costs: readonly number[];
  readonly minimum: readonly number[];
  readonly maximum: readonly number[];
  /** One row per measure, one term per zone: variance of the mean is Σ term/n minus a constant. */
  readonly terms: readonly (readonly number[])[];
  /** Target variance plus that constant, per measure. */
  readonly limits: readonly number[];
  /** Counts that are good enough to begin with; only cheaper ones are sought then. */
  readonly start?: readonly number[];
  /** What counts must keep beside the limits. */
  readonly keeps?: (counts: readonly number[]) => boolean;
}

export interface LeastCostAnswer {
  readonly counts: readonly number[];
  readonly cost: number;
  /** Unrounded optimum. */
  readonly relaxed: readonly number[];
  /** No whole answer can be cheaper. */
  readonly lowerBound: number;
  /** Share of the price that each measure's limit carries; 0 for a measure that does not decide. */
  readonly weights: readonly number[];
  /** False when the maximum counts miss a limit (counts are then the maximum). */
  readonly reached: boolean;
  /** False when the search was cut off: the counts keep all limits, but a set cheaper by a sample or so may exist. */
  readonly proved: boolean;
}

const ROUNDS = 400;
/** A multiplier has settled when its limit is met this closely; one with less than this share of the price is idle. */
const SETTLED = 1e-7;
const NEGLIGIBLE = 1e-8;
/** Where counts run into the hundreds the optimum is so flat that thousands of sets tie; looking at all would be idle. */
const NODE_LIMIT = 40_000;
const TIE_LIMIT = 4000;

export function leastCostCounts(problem: LeastCostProblem): LeastCostAnswer {
  const { costs, maximum, limits } = problem;
  if (!keepsLimits(problem, maximum)) {
    return { counts: [...maximum], cost: costOfCounts(costs, maximum), relaxed: [...maximum], lowerBound: costOfCounts(costs, maximum), weights: limits.map(() => 0), reached: false, proved: true };
  }
  const multipliers = solveMultipliers(problem);
  const relaxed = relaxedCounts(problem, multipliers);
  const start = problem.start ?? roundedStart(problem, relaxed);
  const { counts, proved, lowerBound } = searchAround(problem, multipliers, start);
  const prices = multipliers.map((multiplier, j) => multiplier * limits[j]!);
  const priceSum = prices.reduce((sum, price) => sum + price, 0);
  return {
    counts,
    cost: costOfCounts(costs, counts),
    relaxed,
    lowerBound,
    weights: prices.map((price) => (priceSum > 0 ? price / priceSum : 0)),
    reached: true,
    proved,
  };
}

function costOfCounts(costs: readonly number[], counts: readonly number[]): number {
  return costs.reduce((sum, cost, i) => sum + cost * counts[i]!, 0);
}

/** Σ term/n of one measure. */
function used(terms: readonly number[], counts: readonly number[]): number {
  return terms.reduce((sum, term, i) => (term === 0 ? sum : sum + term / counts[i]!), 0);
}

function keepsLimits({ terms, limits }: LeastCostProblem, counts: readonly number[]): boolean {
  return terms.every((row, j) => used(row, counts) <= limits[j]! * (1 + 1e-12));
}

/** Largest share of a limit that the counts use. */
function worstShare({ terms, limits }: LeastCostProblem, counts: readonly number[]): number {
  return Math.max(...terms.map((row, j) => used(row, counts) / limits[j]!));
}

/** Price of variance in a zone: Σ multiplier·term. */
function priced(problem: LeastCostProblem, multipliers: readonly number[]): number[] {
  return problem.costs.map((_, i) => problem.terms.reduce((sum, row, j) => sum + multipliers[j]! * row[i]!, 0));
}

function relaxedCounts(problem: LeastCostProblem, multipliers: readonly number[]): number[] {
  const { costs, minimum, maximum } = problem;
  return priced(problem, multipliers).map((price, i) => Math.min(maximum[i]!, Math.max(minimum[i]!, Math.sqrt(price / costs[i]!))));
}

/** Each multiplier is raised or lowered by the square of how far its limit is missed, until none that counts moves. */
function solveMultipliers(problem: LeastCostProblem): number[] {
  const { costs, terms, limits } = problem;
  let multipliers = terms.map((row, j) => (row.reduce((sum, term, i) => sum + Math.sqrt(term * costs[i]!), 0) / limits[j]!) ** 2);
  for (let round = 0; round < ROUNDS; round++) {
    const counts = relaxedCounts(problem, multipliers);
    const factors = terms.map((row, j) => (used(row, counts) / limits[j]!) ** 2);
    const prices = multipliers.map((multiplier, j) => multiplier * limits[j]!);
    const negligible = NEGLIGIBLE * prices.reduce((sum, price) => sum + price, 0);
    const settled = factors.every((factor, j) => Math.abs(factor - 1) < SETTLED || prices[j]! * Math.max(1, factor) <= negligible);
    multipliers = multipliers.map((multiplier, j) => multiplier * factors[j]!);
    if (settled) break;
  }
  return multipliers;
}

/** Round up, then add where it helps most until every limit holds, then take away whatever is not needed, dearest first. */
function roundedStart(problem: LeastCostProblem, relaxed: readonly number[]): number[] {
  const { costs, minimum, maximum, terms, limits } = problem;
  const counts = relaxed.map((n, i) => Math.min(maximum[i]!, Math.ceil(n - 1e-9)));
  while (!keepsLimits(problem, counts)) {
    const worst = terms.map((row, j) => used(row, counts) / limits[j]!).reduce((best, share, j, all) => (share > all[best]! ? j : best), 0);
    const gains = counts.map((n, i) => (n >= maximum[i]! ? -1 : terms[worst]![i]! / (n * (n + 1)) / costs[i]!));
    counts[gains.indexOf(Math.max(...gains))]! += 1;
  }
  const dearestFirst = costs.map((_, i) => i).sort((a, b) => costs[b]! - costs[a]!);
  for (let again = true; again; ) {
    again = false;
    for (const i of dearestFirst) {
      if (counts[i]! <= minimum[i]!) continue;
      counts[i]! -= 1;
      if (keepsLimits(problem, counts)) again = true;
      else counts[i]! += 1;
    }
  }
  return counts;
}

interface Candidate {
  readonly n: number;
  /** c·n + price/n above the zone's own least: what choosing this count costs at these prices. */
  readonly excess: number;
}

interface PricedZone {
  readonly cost: number;
  readonly price: number;
  readonly low: number;
  readonly high: number;
}

/** Least c·n + price/n over the whole counts of a zone. */
function leastValue({ cost, price, low, high }: PricedZone): number {
  const middle = Math.min(high, Math.max(low, Math.sqrt(price / cost)));
  return Math.min(...[Math.floor(middle), Math.ceil(middle)].map((n) => cost * n + price / n));
}

/** Counts of one zone whose excess is at most `gap`, cheapest first. */
function candidatesWithin(zone: PricedZone, gap: number): Candidate[] {
  const { cost, price, low, high } = zone;
  const value = (n: number) => cost * n + price / n;
  const middle = Math.floor(Math.min(high, Math.max(low, Math.sqrt(price / cost))));
  const least = leastValue(zone);
  const found: Candidate[] = [];
  for (let n = middle; n >= low && value(n) - least <= gap; n--) found.push({ n, excess: value(n) - least });
  for (let n = middle + 1; n <= high && value(n) - least <= gap; n++) found.push({ n, excess: value(n) - least });
  return found.sort((a, b) => a.excess - b.excess);
}

/** Exhaustive search below the best cost so far; of equally cheap answers the one with most room under its limits. */
function searchAround(problem: LeastCostProblem, multipliers: readonly number[], start: readonly number[]): { counts: number[]; proved: boolean; lowerBound: number } {
  const { costs, minimum, maximum, terms, limits, keeps } = problem;
  const prices = priced(problem, multipliers);
  const zones = costs.map((cost, i) => ({ cost, price: prices[i]!, low: minimum[i]!, high: maximum[i]! }));
  const slack = 1e-9 * (1 + costOfCounts(costs, start));
  let best = [...start];
  let bestCost = costOfCounts(costs, start);
  let bestShare = worstShare(problem, start);
  const floorValue = zones.reduce((sum, zone) => sum + leastValue(zone), 0) - multipliers.reduce((sum, multiplier, j) => sum + multiplier * limits[j]!, 0);
  const lists = zones.map((zone) => candidatesWithin(zone, bestCost - floorValue + slack));
  // What the zones still open use of each limit at the very least.
  const restUsed = terms.map((row) => {
    const rest = [...row.map(() => 0), 0];
    for (let i = row.length - 1; i >= 0; i--) rest[i] = rest[i + 1]! + row[i]! / Math.max(1, ...lists[i]!.map(({ n }) => n));
    return rest;
  });
  // With one cost for all zones the total moves in whole steps, so a best within a step of the bound is the best there is.
  const step = costs.every((cost) => cost === costs[0]) ? costs[0]! : 0;
  const isCheapest = () => bestCost - step < floorValue - slack;
  const counts = costs.map(() => 0);
  let nodes = 0;
  const visit = (zone: number, state: { excess: number; used: readonly number[]; cost: number }): void => {
    if (nodes > (isCheapest() ? TIE_LIMIT : NODE_LIMIT)) return;
    nodes += 1;
    if (zone === costs.length) {
      const share = Math.max(...state.used.map((value, j) => value / limits[j]!));
      if (state.cost > bestCost + slack || (state.cost > bestCost - slack && share >= bestShare)) return;
      if (keeps && !keeps(counts)) return;
      best = [...counts];
      bestCost = Math.min(bestCost, state.cost);
      bestShare = share;
      return;
    }
    for (const { n, excess } of lists[zone]!) {
      if (state.excess + excess > bestCost - floorValue + slack) break;
      const next = terms.map((row, j) => state.used[j]! + row[zone]! / n);
      if (next.some((value, j) => value + restUsed[j]![zone + 1]! > limits[j]! * (1 + 1e-12))) continue;
      counts[zone] = n;
      visit(zone + 1, { excess: state.excess + excess, used: next, cost: state.cost + costs[zone]! * n });
    }
  };
  visit(0, { excess: 0, used: terms.map(() => 0), cost: 0 });
  return { counts: best, proved: nodes <= NODE_LIMIT || isCheapest(), lowerBound: floorValue };
}
