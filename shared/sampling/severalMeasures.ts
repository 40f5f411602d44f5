import { finiteTerm, minimumOf, maximumOf, targetVariance, totalVines } from './allocate.ts';
import { blockSampleSize } from './blockSampleSize.ts';
import { cheaperCounts, grownCounts, type CheaperAsk } from './cheaperCounts.ts';
import { leastCostCounts, type LeastCostAnswer, type LeastCostProblem } from './leastCost.ts';
import { checkConfidence, checkMargin } from './margins.ts';
import { criticalT, criticalZ } from './quantiles.ts';
import { sampleSize, type SampleSize } from './sampleSize.ts';

/**
 * Several measures taken on the same walk. Either every zone must keep every margin itself (the usual wish for pick
 * lots), or the mean over the zones must, and then the cheapest whole counts are found exactly.
 * Sources: Cochran 1977 §5A.4; Kokan & Khan 1967; Bethel 1989, Survey Methodology 15:47.
 */
export interface SharedZone {
  readonly vines: number;
  /** Cost of one vine with all its measures; 1 when left out. */
  readonly cost?: number;
  readonly minimum?: number;
  readonly maximum?: number;
}

export interface MeasureDemand {
  readonly code: string;
  /** One spread per zone, on the scale of the margin. */
  readonly spreads: readonly number[];
  readonly margin: number;
  readonly confidence: number;
  /** Per zone, see `AllocationZone`; 1 when left out. */
  readonly finiteShares?: readonly number[];
  /** Per zone, see `AllocationZone`. */
  readonly spreadDfs?: readonly (number | null)[];
}

export interface ZoneDemand {
  /** Largest count over the measures. */
  readonly n: number;
  /** Which measure asks for it; null when the floor does. */
  readonly driver: string | null;
  readonly byMeasure: readonly SampleSize[];
}

/** Counts when every zone must keep every margin. Example: Brix 22 13 38, pH 18 33 13, clusters 41 20 57 → 41 33 57. */
export function everyZoneCounts(zones: readonly SharedZone[], measures: readonly MeasureDemand[], { finitePopulation = true } = {}): ZoneDemand[] {
  return zones.map((zone, i) => {
    const populationSize = finitePopulation ? zone.vines : Infinity;
    const byMeasure = measures.map(({ spreads, margin, confidence, finiteShares }) => sampleSize({ spread: spreads[i]!, margin, confidence, populationSize, finiteShare: finiteShares?.[i], minimum: zone.minimum }));
    const n = Math.max(...byMeasure.map((answer) => answer.n));
    const largest = byMeasure.findIndex((answer) => answer.n === n);
    return { n, driver: byMeasure[largest]!.limitedBy === 'minimum' ? null : measures[largest]!.code, byMeasure };
  });
}

export interface SharedAnswer {
  readonly counts: readonly number[];
  readonly cost: number;
  /** Variance of the mean over zones as a share of what is allowed, per measure; 1 is just enough. */
  readonly ratios: readonly number[];
  /** Measures whose limit decides, the heaviest first; empty when the zones' minimum is enough. */
  readonly binding: readonly string[];
  readonly relaxed: readonly number[];
  readonly lowerBound: number;
  readonly reached: boolean;
  readonly proved: boolean;
}

/** A limit that carries less than this share of the price does not decide. */
const DECIDES = 0.01;
const KEPT = 1 + 1e-12;

/** Cheapest whole counts with which the mean over all zones keeps every margin. */
export function leastCostForAll(zones: readonly SharedZone[], measures: readonly MeasureDemand[], { factor = 't' }: { factor?: 't' | 'z' } = {}): SharedAnswer {
  for (const { margin, confidence } of measures) {
    checkMargin(margin);
    checkConfidence(confidence);
  }
  const parts = measures.map((measure) => varianceTerms(zones, measure));
  const asKnown = measures.map(({ margin, confidence }) => targetVariance(margin, criticalZ(confidence)));
  const known = solve(zones, measures, asKnown);
  const answer = factor === 't' && known.reached ? withOwnFactors(zones, measures, known) : known;
  const targets = factor === 't' && answer.reached ? measures.map((measure, j) => ownTarget(measure, parts[j]!, answer.counts)) : asKnown;
  const order = answer.weights.map((weight, j) => ({ weight, code: measures[j]!.code })).sort((a, b) => b.weight - a.weight);
  const overMinimum = answer.counts.some((n, i) => n > minimumOf({ ...zones[i]!, sd: 0 }));
  return {
    counts: answer.counts,
    cost: answer.cost,
    ratios: parts.map((part, j) => varianceOf(part, answer.counts) / targets[j]!),
    binding: overMinimum ? order.filter(({ weight }) => weight >= DECIDES).map(({ code }) => code) : [],
    relaxed: answer.relaxed,
    lowerBound: answer.lowerBound,
    reached: answer.reached,
    proved: answer.proved,
  };
}

const costOf = ({ cost = 1 }: SharedZone): number => cost;

/** Variance that just keeps the margin with the factor t of these counts. */
function ownTarget({ margin, confidence }: MeasureDemand, parts: VarianceOf, counts: readonly number[]): number {
  return targetVariance(margin, criticalT(confidence, degreesOfFreedom(parts, counts)));
}

/** Whether that target is kept. Factors of whole degrees of freedom, worked out once, settle it nearly always. */
function keepsOwnTarget({ margin, confidence }: MeasureDemand, parts: VarianceOf, counts: readonly number[]): boolean {
  const variance = varianceOf(parts, counts);
  // Student's t is never below z, which is quick to ask first.
  if (variance > targetVariance(margin, criticalZ(confidence)) * KEPT) return false;
  const df = degreesOfFreedom(parts, counts);
  const keptAt = (rounded: number) => variance <= targetVariance(margin, criticalT(confidence, rounded)) * KEPT;
  if (df >= 1 && keptAt(Math.floor(df))) return true;
  return keptAt(Math.ceil(df)) && keptAt(df);
}

/**
 * The cheapest counts with Student's t at the degrees of freedom that they give themselves. `known` is the answer with
 * spreads taken as known, which is never dearer. Counts that keep their own factor are grown from it and made cheaper,
 * and then all that could be cheaper still are searched.
 */
function withOwnFactors(zones: readonly SharedZone[], measures: readonly MeasureDemand[], known: LeastCostAnswer): LeastCostAnswer {
  const ask = askOf(zones, measures);
  const costs = zones.map(costOf);
  const priced = (answer: LeastCostAnswer, counts: readonly number[]) => ({ ...answer, counts, cost: costs.reduce((sum, cost, i) => sum + cost * counts[i]!, 0) });
  if (ask.keeps(known.counts)) return known;
  const grown = grownCounts(known.counts, ask);
  if (grown === null) return { ...priced(known, ask.maximum), relaxed: ask.maximum, weights: measures.map(() => 0), reached: false, proved: true };
  const start = cheapestAround(zones, measures, grown);
  const most = priced(known, start).cost / Math.min(...costs);
  const least = measures.map((measure) => targetVariance(measure.margin, criticalT(measure.confidence, mostDegrees(measure, zones, most))));
  return solve(zones, measures, least, { start, keeps: ask.keeps });
}

/** Satterthwaite's degrees of freedom never exceed those of all zones together. */
function mostDegrees({ spreadDfs }: MeasureDemand, zones: readonly SharedZone[], mostSamples: number): number {
  const ofPilots = zones.map((_, i) => spreadDfs?.[i] ?? null).filter((df) => df !== null);
  return ofPilots.reduce((sum, df) => sum + df, 0) + Math.max(1, mostSamples - zones.length);
}

/** How counts are judged on the way to cheaper ones; `targets`: fixed variances to measure the share that is used by, which is rough but quick. */
function askOf(zones: readonly SharedZone[], measures: readonly MeasureDemand[], targets?: readonly number[]): CheaperAsk {
  const limits = zones.map((zone) => ({ ...zone, sd: 0 }));
  const parts = measures.map((measure) => varianceTerms(zones, measure));
  const targetOf = (j: number, tried: readonly number[]) => targets?.[j] ?? ownTarget(measures[j]!, parts[j]!, tried);
  const used = (tried: readonly number[]) => parts.reduce((most, part, j) => Math.max(most, varianceOf(part, tried) / targetOf(j, tried)), -Infinity);
  const keeps = (tried: readonly number[]) => measures.every((measure, j) => keepsOwnTarget(measure, parts[j]!, tried));
  return { costs: zones.map(costOf), minimum: limits.map(minimumOf), maximum: limits.map(maximumOf), used, keeps };
}

/** `counts` made cheaper in steps. */
function cheapestAround(zones: readonly SharedZone[], measures: readonly MeasureDemand[], counts: readonly number[]): number[] {
  const targets = measures.map((measure) => ownTarget(measure, varianceTerms(zones, measure), counts));
  return cheaperCounts(counts, askOf(zones, measures, targets));
}

/** For one measure: counts shared by spread and cost, made as cheap as they can be. Much quicker than the programme for several. */
export function leastCostForOne(zones: readonly SharedZone[], measure: MeasureDemand): { readonly counts: readonly number[]; readonly atMinimum: boolean } {
  const priced = zones.map((zone, i) => ({ ...zone, ...spreadOf(measure, i) }));
  const { counts, reached, atMinimum } = blockSampleSize({ zones: priced, margin: measure.margin, confidence: measure.confidence, method: 'spreadAndCost' });
  return { counts: reached && !atMinimum ? cheapestAround(zones, [measure], counts) : counts, atMinimum };
}

function solve(zones: readonly SharedZone[], measures: readonly MeasureDemand[], targets: readonly number[], from: Pick<LeastCostProblem, 'start' | 'keeps'> = {}): LeastCostAnswer {
  const all = totalVines(zones);
  const terms = measures.map(({ spreads }) => zones.map((zone, i) => ((zone.vines / all) * spreads[i]!) ** 2));
  const problem: LeastCostProblem = {
    ...from,
    costs: zones.map((zone) => zone.cost ?? 1),
    minimum: zones.map((zone) => minimumOf({ ...zone, sd: 0 })),
    maximum: zones.map((zone) => maximumOf({ ...zone, sd: 0 })),
    terms,
    limits: targets.map((target, j) => target + terms[j]!.reduce((sum, term, i) => sum + term * termOf(zones[i]!, measures[j]!, i), 0)),
  };
  return leastCostCounts(problem);
}

function termOf({ vines }: SharedZone, { finiteShares }: MeasureDemand, i: number): number {
  return finiteTerm({ vines, finiteShare: finiteShares?.[i] });
}

/** What one measure's variance is made of: Σ term·(1/n − rest) over the zones. */
interface VarianceOf {
  readonly terms: readonly number[];
  readonly rests: readonly number[];
  readonly dfs: readonly (number | null)[];
}

function varianceTerms(zones: readonly SharedZone[], measure: MeasureDemand): VarianceOf {
  const all = totalVines(zones);
  return {
    terms: zones.map((zone, i) => ((zone.vines / all) * measure.spreads[i]!) ** 2),
    rests: zones.map((zone, i) => termOf(zone, measure, i)),
    dfs: zones.map((_, i) => measure.spreadDfs?.[i] ?? null),
  };
}

/** Plain loops here and below: a search asks thousands of times while a slider moves. */
function varianceOf({ terms, rests }: VarianceOf, counts: readonly number[]): number {
  let variance = 0;
  for (let i = 0; i < terms.length; i++) variance += terms[i]! * Math.max(0, 1 / counts[i]! - rests[i]!);
  return variance;
}

/** Satterthwaite 1946, as in blockSampleSize.ts. */
function degreesOfFreedom({ terms, rests, dfs }: VarianceOf, counts: readonly number[]): number {
  let variance = 0;
  let below = 0;
  for (let i = 0; i < terms.length; i++) {
    const part = terms[i]! * Math.max(0, 1 / counts[i]! - rests[i]!);
    variance += part;
    if (part !== 0) below += (part * part) / (dfs[i] ?? counts[i]! - 1);
  }
  return below === 0 ? Infinity : (variance * variance) / below;
}

/**
 * On a walk whose vines are fixed, each measure may need fewer of them: cheapest counts per measure that keep its own
 * margin for the mean over zones, never more than the vines visited.
 */
export function trimToVisited(zones: readonly SharedZone[], measures: readonly MeasureDemand[], visited: readonly number[]): number[][] {
  return measures.map((measure) => {
    // One measure, one cost: sharing by spread is the cheapest.
    const limited = zones.map(({ vines, minimum }, i) => ({ vines, minimum, maximum: visited[i]!, ...spreadOf(measure, i) }));
    return [...blockSampleSize({ zones: limited, margin: measure.margin, confidence: measure.confidence, method: 'spread' }).counts];
  });
}

/** What allocation needs to know of a measure in a zone. */
export function spreadOf({ spreads, finiteShares, spreadDfs }: MeasureDemand, i: number): { sd: number; finiteShare: number | undefined; spreadDf: number | null } {
  return { sd: spreads[i]!, finiteShare: finiteShares?.[i], spreadDf: spreadDfs?.[i] ?? null };
}
