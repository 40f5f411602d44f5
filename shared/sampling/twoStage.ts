import { AnalysisError } from '../analysis/analysisError.ts';
import { ceilGuarded } from './sampleSize.ts';

/**
 * Vines, clusters on a vine, berries on a cluster: how to split the work.
 * V = (1 − n/N)S_b²/n + S_w²/(nm) + S_e²/(nmk); vines run out, clusters of a vine are taken as many. Sources: Cochran 1977 ch. 10–11; de Gruijter et al. 2006, Sampling for
 * Natural Resource Monitoring; Brus, Spatial Sampling with R, ch. 7; design effect Kish 1965.
 * S_b is the true spread between vines, with the within part taken out; S_w and S_e likewise.
 */

/** 1 + (m − 1)ρ. Example: 5 clusters a vine, ρ 0.3 → 2.2. */
export function designEffect(perVine: number, intraClass: number): number {
  return 1 + (perVine - 1) * intraClass;
}

/** How many independent units n correlated ones are worth. A negative ρ is taken as 0 when planning. */
export function effectiveUnits(units: number, perVine: number, intraClass: number): number {
  return units / designEffect(perVine, Math.max(0, intraClass));
}

export interface StageVariances {
  readonly betweenVines: number;
  readonly withinVine: number;
  /** Between berries of a cluster; 0 for two stages. */
  readonly withinCluster?: number;
}

export interface StageCosts {
  /** One more vine: walking to it and setting up. */
  readonly perVine: number;
  readonly perCluster: number;
  readonly perBerry?: number;
}

export interface StageCounts {
  readonly vines: number;
  /** Vines there are; without end when left out. */
  readonly of?: number;
  readonly perVine: number;
  readonly perCluster?: number;
}

export function stageVariance(variances: StageVariances, { vines, of = Infinity, perVine, perCluster = 1 }: StageCounts): number {
  const { betweenVines, withinVine, withinCluster = 0 } = variances;
  return (betweenVines * (1 - vines / of)) / vines + withinVine / (vines * perVine) + withinCluster / (vines * perVine * perCluster);
}

export function stageCost(costs: StageCosts, { vines, perVine, perCluster = 1 }: StageCounts): number {
  return vines * (costs.perVine + perVine * (costs.perCluster + perCluster * (costs.perBerry ?? 0)));
}

/** (S_w/S_b)√(c_vine/c_cluster), unrounded. Example: spread ratio 1.2, 90 s and 8 s → 4.02 clusters a vine. */
export function bestPerVine(spreadRatio: number, costs: StageCosts): number {
  return spreadRatio * Math.sqrt(costs.perVine / costs.perCluster);
}

/** (S_e/S_w)√(c_cluster/c_berry), unrounded: berries a cluster. */
export function bestPerCluster(variances: StageVariances, costs: StageCosts): number {
  return Math.sqrt(((variances.withinCluster ?? 0) * costs.perCluster) / (variances.withinVine * (costs.perBerry ?? Number.NaN)));
}

export type StageTarget = { readonly variance: number } | { readonly budget: number };

export interface StageSplit extends Required<Omit<StageCounts, 'of'>> {
  readonly variance: number;
  readonly cost: number;
  /** Unrounded best numbers of the formula; perCluster is null for two stages. */
  readonly best: { readonly perVine: number; readonly perCluster: number | null };
}

export interface SplitQuestion {
  readonly variances: StageVariances;
  readonly costs: StageCosts;
  readonly target: StageTarget;
  /** Clusters and berries there are to take. */
  readonly maximumPerVine?: number;
  readonly maximumPerCluster?: number;
  /** Vines it does not go below: two. */
  readonly minimumVines?: number;
}

/** Share by which a larger handful must be better to be preferred: the optimum is flat, and fewer per vine is easier. */
const WORTH_IT = 0.01;

/** Tried where nothing is said of how many there are: more of a vine is no sample but its harvest. */
const MOST_CLUSTERS = 60;
const MOST_BERRIES = 300;

/**
 * Least cost for a variance, or least variance for a budget, over all whole numbers of clusters and berries; of those within
 * a hundredth of it the fewest clusters, then the fewest berries. Cochran's numbers (`best`) hold for fractions only: where
 * they ask for less than one cluster of a vine, one is taken, and then other numbers of berries are best.
 */
export function bestSplit(question: SplitQuestion): StageSplit {
  const { variances, costs, target, maximumPerVine = MOST_CLUSTERS, maximumPerCluster = MOST_BERRIES } = question;
  checkStages(question);
  const threeStages = (variances.withinCluster ?? 0) > 0 && (costs.perBerry ?? 0) > 0;
  const perVineBest = bestPerVine(Math.sqrt(variances.withinVine / variances.betweenVines), costs);
  const best = { perVine: perVineBest, perCluster: threeStages ? bestPerCluster(variances, costs) : null };
  const options = upTo(maximumPerVine).flatMap((perVine) => upTo(threeStages ? maximumPerCluster : 1).flatMap((perCluster) => complete({ perVine, perCluster }, question, best)));
  if (options.length === 0) throw new AnalysisError('budget_too_small', `A budget of ${'budget' in target ? target.budget : ''} does not pay for two vines. Allow at least ${stageCost(costs, { vines: 2, perVine: 1 })}.`);
  const judged = (split: StageSplit) => ('budget' in target ? split.variance : split.cost);
  const least = options.reduce((kept, split) => Math.min(kept, judged(split)), Infinity);
  return options.find((split) => judged(split) <= least * (1 + WORTH_IT))!;
}

function upTo(most: number): number[] {
  return Array.from({ length: Math.max(1, most) }, (_, i) => i + 1);
}

function checkStages({ variances, costs }: SplitQuestion): void {
  if (!(variances.betweenVines > 0)) throw new AnalysisError('no_vine_spread', 'The spread between vines must be above 0; enter the estimate or a trade default.');
  if (!(variances.withinVine >= 0)) throw new AnalysisError('bad_spread', `The spread within a vine must be 0 or more; got variance ${variances.withinVine}.`);
  if (!(costs.perVine > 0 && costs.perCluster > 0)) throw new AnalysisError('bad_cost', 'The time per vine and per cluster must both be above 0.');
}

function complete(counts: { perVine: number; perCluster: number }, { variances, costs, target, minimumVines = 2 }: SplitQuestion, best: StageSplit['best']): StageSplit[] {
  const one = { vines: 1, ...counts };
  const vines = 'budget' in target ? Math.floor(target.budget / stageCost(costs, one) + 1e-9) : Math.max(minimumVines, ceilGuarded(stageVariance(variances, one) / target.variance));
  if (vines < minimumVines) return [];
  const split = { ...counts, vines };
  return [{ ...split, variance: stageVariance(variances, split), cost: stageCost(costs, split), best }];
}
