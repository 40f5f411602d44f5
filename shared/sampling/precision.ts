import { checkConfidence, checkPopulation } from './margins.ts';
import { criticalT } from './quantiles.ts';
import { HARD_MINIMUM, sampleSize, type SampleSize } from './sampleSize.ts';

/**
 * How well a mean is known from the readings so far, and how many more the wanted margin takes.
 * x̄ ± t·s/√n·√(1 − n/N). Sources: IUPAC Gold Book C01247 (without the last factor), Cochran 1977 §§2.7–2.8.
 */

/** An estimate with the spread of its own error. Everything downstream (lots, change, forecast) passes these on. */
export interface Estimate {
  readonly value: number;
  readonly standardError: number;
  /** Degrees of freedom behind the standard error; Infinity when it is taken as known. */
  readonly df: number;
}

export interface Interval extends Estimate {
  readonly confidence: number;
  readonly halfWidth: number;
  readonly lower: number;
  readonly upper: number;
}

/** The interval of any estimate. A standard error of NaN (fewer than two readings) gives NaN limits, never a guess. */
export function intervalOf(estimate: Estimate, confidence: number): Interval {
  checkConfidence(confidence);
  const { value, standardError, df } = estimate;
  const halfWidth = standardError === 0 ? 0 : df > 0 ? criticalT(confidence, df) * standardError : Number.NaN;
  return { value, standardError, df, confidence, halfWidth, lower: value - halfWidth, upper: value + halfWidth };
}

export interface SampleFacts {
  readonly n: number;
  readonly mean: number;
  readonly sd: number;
  /** Vines in the zone; Infinity (the default) leaves the population correction out. */
  readonly populationSize?: number;
}

/** Mean with its standard error. When every vine was read the error is 0. */
export function meanEstimate({ n, mean, sd, populationSize = Infinity }: SampleFacts): Estimate {
  checkPopulation(populationSize);
  if (n >= populationSize) return { value: mean, standardError: 0, df: Math.max(n - 1, 0) };
  if (n < HARD_MINIMUM) return { value: mean, standardError: Number.NaN, df: 0 };
  return { value: mean, standardError: (sd / Math.sqrt(n)) * Math.sqrt(1 - n / populationSize), df: n - 1 };
}

/** Example: n 10, mean 22.62, sd 0.672970, 95 % → 22.138586 to 23.101414. */
export function meanInterval(facts: SampleFacts, confidence: number): Interval {
  return intervalOf(meanEstimate(facts), confidence);
}

export interface HowManyMore {
  /** Readings wanted in total if the spread stays as it is. */
  readonly needed: SampleSize;
  readonly more: number;
  /** Half-width now; NaN with fewer than two readings. */
  readonly halfWidthNow: number;
  /** True when the margin is already kept. */
  readonly enough: boolean;
}

export interface HowManyMoreQuestion {
  readonly n: number;
  readonly spread: number;
  readonly margin: number;
  readonly confidence: number;
  readonly populationSize?: number;
  readonly minimum?: number;
}

/** Example: n 6, sd 0.8, margin 0.5, 95 % → half-width 0.84 now, 13 in total, 7 more. */
export function howManyMore(question: HowManyMoreQuestion): HowManyMore {
  const { n, spread, margin, confidence, populationSize = Infinity, minimum = HARD_MINIMUM } = question;
  const needed = sampleSize({ spread, margin, confidence, populationSize, minimum });
  const now = meanInterval({ n, mean: 0, sd: spread, populationSize }, confidence);
  const more = Math.max(0, needed.n - n);
  return { needed, more, halfWidthNow: now.halfWidth, enough: more === 0 };
}
