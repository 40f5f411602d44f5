import { checkConfidence, checkMargin, checkPopulation, checkSpread } from './margins.ts';
import { criticalT, criticalZ } from './quantiles.ts';

/**
 * How many vines for one mean. In: spread and margin on one scale (both in the unit, or both relative).
 * Sources: Cochran 1977, Sampling Techniques §4.6 (normal form, finite population), §4.7 with Stein 1945,
 * Ann. Math. Statist. 16:243 (two stages); NIST/SEMATECH e-Handbook §7.2.2.2.
 * The usual loop n ← ⌈(t·s/E)²⌉ can cycle for ever (35, 38, 37, 38, 37 …); here n is searched upwards instead.
 */

/** A variance needs two readings. */
export const HARD_MINIMUM = 2;
/** Below this the interval is too wide to be of use (t with 4 degrees of freedom is still 2.8 at 95 %); judgement. */
export const ADVISED_MINIMUM = 5;

export interface SampleSizeQuestion {
  readonly spread: number;
  readonly margin: number;
  readonly confidence: number;
  /** Vines in the zone; Infinity when the aim is more than this zone's mean. */
  readonly populationSize?: number;
  /** Share of the variance that reading every vine would take away; 1 when left out. */
  readonly finiteShare?: number;
  /** Floor wanted by the planner; never below 2. */
  readonly minimum?: number;
}

export interface SampleSize {
  readonly n: number;
  /** Half-width that n gives if the spread is as assumed. */
  readonly halfWidth: number;
  /** What decided n: the margin, the floor, or that the zone has no more vines. */
  readonly limitedBy: 'margin' | 'minimum' | 'population';
}

/** Smallest whole number not below x, forgiving the last bits: (1.96·10/1.96)² is 100.00000000000004 in doubles. */
export function ceilGuarded(x: number): number {
  return Math.ceil(x - 1e-9 * Math.max(1, Math.abs(x)));
}

/** n₀ = (z·s/E)², not rounded. Example: 1.5, 0.5, 95 % → 34.573129. */
export function normalSampleSize({ spread, margin, confidence }: SampleSizeQuestion): number {
  return ((criticalZ(confidence) * spread) / margin) ** 2;
}

/** n₀/(1 + n₀/N), not rounded. Example: 34.573129 of 200 → 29.477485. */
export function correctForPopulation(sampleSize: number, populationSize: number): number {
  return sampleSize / (1 + sampleSize / populationSize);
}

export interface HalfWidthQuestion {
  readonly spread: number;
  readonly n: number;
  readonly confidence: number;
  readonly populationSize?: number;
  readonly finiteShare?: number;
  /** Degrees of freedom behind the spread; n − 1 when it comes from these n readings. */
  readonly df?: number;
}

/**
 * t·s/√n·√(1 − f·n/N): the inverse of the sample size. NaN for fewer than two readings, 0 when every vine is read.
 * f is the finite share: what differs between the clusters of a vine stays unknown when every vine has been read (the
 * two-stage variance of Cochran 1977, §10.3, with clusters taken as many).
 */
export function halfWidth({ spread, n, confidence, populationSize = Infinity, finiteShare = 1, df = n - 1 }: HalfWidthQuestion): number {
  const left = 1 - finiteShare * Math.min(1, n / populationSize);
  if (left <= 0) return 0;
  if (n < HARD_MINIMUM || df <= 0) return Number.NaN;
  return criticalT(confidence, df) * (spread / Math.sqrt(n)) * Math.sqrt(left);
}

/** The smallest n ≥ 2 whose t half-width keeps the margin, raised to the floor, capped at the population. */
export function sampleSize(question: SampleSizeQuestion): SampleSize {
  const { spread, margin, confidence, populationSize = Infinity, finiteShare = 1, minimum = HARD_MINIMUM } = question;
  checkSpread(spread);
  checkMargin(margin);
  checkConfidence(confidence);
  checkPopulation(populationSize);
  const widthAt = (n: number) => halfWidth({ spread, n, confidence, populationSize, finiteShare });
  const floor = Math.max(HARD_MINIMUM, Math.ceil(minimum));
  if (populationSize <= floor) return { n: populationSize, halfWidth: widthAt(populationSize), limitedBy: 'population' };
  // t exceeds z, so the normal answer is a lower bound; the half-width falls with n, so the first n that fits is the smallest.
  let n = Math.max(HARD_MINIMUM, Math.floor(correctForPopulation(normalSampleSize(question), populationSize / finiteShare)));
  while (n < populationSize && widthAt(n) > margin * (1 + 1e-12)) n += 1;
  n = Math.min(n, populationSize);
  if (n < floor) return { n: floor, halfWidth: widthAt(floor), limitedBy: 'minimum' };
  return { n, halfWidth: widthAt(n), limitedBy: n === populationSize ? 'population' : 'margin' };
}

/** ⌈n₀⌉ with the population correction, for spreads known from much history (some 60 degrees of freedom or more). */
export function normalSampleSizeWhole(question: SampleSizeQuestion): number {
  const { populationSize = Infinity, minimum = HARD_MINIMUM } = question;
  const corrected = correctForPopulation(normalSampleSize(question), populationSize);
  return Math.min(populationSize, Math.max(HARD_MINIMUM, minimum, ceilGuarded(corrected)));
}

export interface SampleSizeSteps extends SampleSize {
  readonly z: number;
  readonly normal: number;
  readonly normalInPopulation: number;
  readonly df: number;
  readonly t: number;
  /** Half-width with one vine fewer: just above the margin, or NaN at n = 2. */
  readonly halfWidthOneFewer: number;
}

/** The same answer with every number on the way, for the screen that shows the working. */
export function sampleSizeSteps(question: SampleSizeQuestion): SampleSizeSteps {
  const answer = sampleSize(question);
  const { spread, confidence, populationSize = Infinity, finiteShare = 1 } = question;
  const normal = normalSampleSize(question);
  return {
    ...answer,
    z: criticalZ(confidence),
    normal,
    normalInPopulation: correctForPopulation(normal, populationSize / finiteShare),
    df: answer.n - 1,
    t: answer.n < HARD_MINIMUM ? Number.NaN : criticalT(confidence, answer.n - 1),
    halfWidthOneFewer: halfWidth({ spread, n: answer.n - 1, confidence, populationSize, finiteShare }),
  };
}

export interface PilotQuestion {
  readonly pilotN: number;
  /** n₁ − 1 when left out; fewer when the pilot's readings are of several visits and were pooled within them. */
  readonly pilotDf?: number;
  readonly pilotSpread: number;
  readonly margin: number;
  readonly confidence: number;
  readonly populationSize?: number;
  readonly finiteShare?: number;
}

export interface PilotAnswer {
  readonly unrounded: number;
  /** The same among the vines there are. */
  readonly inPopulation: number;
  readonly total: number;
  readonly more: number;
}

/**
 * Stein's two-stage rule: total = max(n₁, ⌈(t·s₁/E)²⌉) with t at the pilot's n₁ − 1, not iterated; the final
 * interval uses s₁ and the same t. Covers at the stated rate whatever the true spread is, for normal data. Among N vines
 * the correction of Cochran 1977 §4.6 is put into the count and into the interval, so that they still agree.
 */
export function steinSampleSize({ pilotN, pilotDf = pilotN - 1, pilotSpread, margin, confidence, populationSize = Infinity, finiteShare = 1 }: PilotQuestion): PilotAnswer {
  checkSpread(pilotSpread);
  checkMargin(margin);
  checkConfidence(confidence);
  const unrounded = ((criticalT(confidence, pilotDf) * pilotSpread) / margin) ** 2;
  const inPopulation = correctForPopulation(unrounded, populationSize / finiteShare);
  const total = Math.min(populationSize, Math.max(pilotN, ceilGuarded(inPopulation)));
  return { unrounded, inPopulation, total, more: total - pilotN };
}
