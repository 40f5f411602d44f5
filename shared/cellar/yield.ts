import { AnalysisError } from '../analysis/analysisError.ts';
import { checkConfidence } from '../sampling/margins.ts';
import { criticalT } from '../sampling/quantiles.ts';

/**
 * Expected tonnes = places × (1 − missing) × clusters a vine × cluster weight × growth × (1 − losses)/10⁶, with its
 * error and the part that dominates it. Relative errors add in squares (first order; the exact product of independent
 * factors is given beside it). Growth is harvest weight over weight when counted: 1 at harvest, about 2 at lag phase,
 * where estimates with an assumed factor have missed by some 30 % (de la Fuente et al. 2015, abstract). Errors from few
 * vines are known poorly themselves, so the width is Student's t with degrees of freedom after Satterthwaite 1946.
 */
export const YIELD_PARTS = ['vines', 'clusters', 'clusterWeight', 'growth', 'losses'] as const;
export type YieldPart = (typeof YIELD_PARTS)[number];

export interface YieldQuestion {
  readonly places: number;
  readonly missingShare: number;
  readonly clustersPerVine: number;
  readonly clusterWeightG: number;
  readonly growthFactor?: number;
  readonly lossShare?: number;
  /** Relative standard errors; a part left out is taken as exact. */
  readonly relativeErrors: Partial<Record<YieldPart, number>>;
  /** Of each relative error, such as n − 1; a part left out counts as well known. */
  readonly degreesOfFreedom?: Partial<Record<YieldPart, number>>;
  readonly confidence: number;
  /** Correlation of the errors of clusters a vine and cluster weight; vines with many clusters have lighter ones. */
  readonly clusterCorrelation?: number;
  /** True while the block has no growth factor of its own: the interval is then at least ±30 %. */
  readonly growthIsAssumed?: boolean;
}

export interface YieldEstimate {
  readonly livingVines: number;
  readonly kgPerVine: number;
  readonly tonnes: number;
  readonly relativeError: number;
  readonly relativeErrorExact: number;
  readonly standardErrorT: number;
  readonly df: number;
  readonly halfWidthT: number;
  readonly lowerT: number;
  readonly upperT: number;
  /** Share of the squared error, largest first; shares add up to 1 (before any correlation). */
  readonly parts: readonly { readonly part: YieldPart; readonly share: number }[];
  /** Null when nothing has an error. */
  readonly dominating: YieldPart | null;
  readonly widenedForGrowth: boolean;
}

/** Least relative half-width while the growth factor is assumed. */
export const ASSUMED_GROWTH_HALF_WIDTH = 0.3;

/** Example: 4000 places, 4 % missing, 28 clusters, 62 g, growth 2, 3 % loss; 2 6 5 10 % → 12.93 t, 12.8 %, growth dominates. */
export function estimateYield(question: YieldQuestion): YieldEstimate {
  checkYield(question);
  const { places, missingShare, clustersPerVine, clusterWeightG, growthFactor = 1, lossShare = 0, confidence } = question;
  const livingVines = places * (1 - missingShare);
  const kgPerVine = (clustersPerVine * clusterWeightG * growthFactor * (1 - lossShare)) / 1000;
  const tonnes = (livingVines * kgPerVine) / 1000;
  const squares = YIELD_PARTS.map((part) => ({ part, square: (question.relativeErrors[part] ?? 0) ** 2 }));
  const total = squares.reduce((sum, { square }) => sum + square, 0);
  const { clusters = 0, clusterWeight = 0 } = question.relativeErrors;
  const shared = 2 * (question.clusterCorrelation ?? 0) * clusters * clusterWeight;
  const relativeError = Math.sqrt(Math.max(0, total + shared));
  const parts = squares.map(({ part, square }) => ({ part, share: total > 0 ? square / total : 0 })).sort((a, b) => b.share - a.share);
  const satterthwaite = squares.reduce((sum, { part, square }) => sum + (square * square) / (question.degreesOfFreedom?.[part] ?? Infinity), 0);
  const df = satterthwaite === 0 ? Infinity : (total * total) / satterthwaite;
  const statistical = criticalT(confidence, df) * relativeError;
  const widenedForGrowth = question.growthIsAssumed === true && statistical < ASSUMED_GROWTH_HALF_WIDTH;
  const halfWidthT = tonnes * (widenedForGrowth ? ASSUMED_GROWTH_HALF_WIDTH : statistical);
  return {
    livingVines,
    kgPerVine,
    tonnes,
    relativeError,
    relativeErrorExact: Math.sqrt(squares.reduce((product, { square }) => product * (1 + square), 1) - 1),
    standardErrorT: tonnes * relativeError,
    df,
    halfWidthT,
    lowerT: Math.max(0, tonnes - halfWidthT),
    upperT: tonnes + halfWidthT,
    parts,
    dominating: total > 0 ? parts[0]!.part : null,
    widenedForGrowth,
  };
}

function checkYield(question: YieldQuestion): void {
  checkConfidence(question.confidence);
  const { places, missingShare, clustersPerVine, clusterWeightG, growthFactor = 1, lossShare = 0 } = question;
  const isShare = (value: number) => value >= 0 && value <= 1;
  if (!isShare(missingShare) || !isShare(lossShare)) throw new AnalysisError('bad_share', `Missing vines and losses are shares between 0 and 1; got ${missingShare} and ${lossShare}.`);
  for (const value of [places, clustersPerVine, clusterWeightG, growthFactor]) {
    if (!(value >= 0 && value < Infinity)) throw new AnalysisError('bad_yield_part', `Vines, clusters, weight and growth must be 0 or more; got ${value}.`);
  }
}
