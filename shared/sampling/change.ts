import { combineLinearly } from './combineEstimates.ts';
import { ceilGuarded } from './sampleSize.ts';
import { checkConfidence, checkMargin } from './margins.ts';
import { intervalOf, type Estimate, type Interval, type SampleFacts } from './precision.ts';
import { criticalT, criticalZ, normalUpperQuantile, studentTUpperQuantile } from './quantiles.ts';
import { sdAboveRounding, summarise } from './variances.ts';

/**
 * Has anything changed between two visits? The words on the screen come from here, so that noise is never called a
 * trend. Two-sample and paired t intervals (Student 1908; Welch 1947 and Satterthwaite 1946 for unequal spreads).
 */
export type ChangeWord = 'higher' | 'lower' | 'notDistinguishable';

/** The whole interval above 0, below 0, or neither. An interval that cannot be formed is never called a change. */
export function wordForChange(change: Pick<Interval, 'lower' | 'upper'>): ChangeWord {
  if (change.lower > 0) return 'higher';
  if (change.upper < 0) return 'lower';
  return 'notDistinguishable';
}

export interface Change extends Interval {
  /** Change that would just be told from none with these errors. */
  readonly detectable: number;
  readonly word: ChangeWord;
}

function changeOf(estimate: Estimate, confidence: number): Change {
  const interval = intervalOf(estimate, confidence);
  return { ...interval, detectable: interval.halfWidth, word: wordForChange(interval) };
}

/** Between visits with different vines, from any two estimates (zone means, block means, lots). */
export function changeBetween(before: Estimate, after: Estimate, confidence: number): Change {
  return changeOf(combineLinearly([{ factor: 1, estimate: after }, { factor: -1, estimate: before }]), confidence);
}

/** Between two samples with different vines that share one spread: pooled s, n₁ + n₂ − 2 degrees of freedom. */
export function changeWithCommonSpread(before: SampleFacts, after: SampleFacts, confidence: number): Change {
  const df = before.n + after.n - 2;
  const pooled = ((before.n - 1) * before.sd ** 2 + (after.n - 1) * after.sd ** 2) / df;
  const standardError = Math.sqrt(pooled * (1 / before.n + 1 / after.n));
  return changeOf({ value: after.mean - before.mean, standardError, df }, confidence);
}

/**
 * Between two visits to the same vines, in the same order. `step` is that of the readings: both ends of a difference
 * were rounded. Example: six vines rising 0.75 → 0.513 to 0.987 at 95 %.
 */
export function changeOfSameVines(before: readonly number[], after: readonly number[], confidence: number, step = 0): Change {
  const { n, mean, sd: seen } = summarise(after.map((value, i) => value - before[i]!));
  const sd = sdAboveRounding(seen, step * Math.SQRT2);
  return changeOf({ value: mean, standardError: sd / Math.sqrt(n), df: Math.max(0, n - 1) }, confidence);
}

export interface DetectableQuestion {
  /** Spread between vines at one visit; for the same vines the spread of their differences (`sdOfDifferences`). */
  readonly sd: number;
  readonly n: number;
  readonly vines: 'new' | 'same';
  readonly confidence: number;
  /** Wanted chance of noticing a change of this size; left out, a change is just told from none. */
  readonly power?: number;
  /** 'z' takes the spread as known, as is usual with a power; else 't'. */
  readonly factor?: 't' | 'z';
}

/**
 * Smallest change that n vines per visit can tell from none. Example: sd 0.9, 10 new vines each, 95 % → 0.845605. With a
 * power, the change noticed in that share of visits, by the quantiles of NIST/SEMATECH e-Handbook §7.2.2.2; a power of 0.5
 * is the change that is just told from none.
 */
export function smallestDetectableChange(question: DetectableQuestion): number {
  const { sd, n, vines, confidence, power, factor = power === undefined ? 't' : 'z' } = question;
  checkConfidence(confidence);
  const error = sd * Math.sqrt((vines === 'new' ? 2 : 1) / n);
  if (factor === 'z') return (criticalZ(confidence) + (power === undefined ? 0 : normalUpperQuantile(1 - power))) * error;
  const df = dfOfChange(vines, n);
  return df > 0 ? (criticalT(confidence, df) + (power === undefined ? 0 : studentTUpperQuantile(1 - power, df))) * error : Number.NaN;
}

/** Degrees of freedom between two visits to n vines each: pairs, or two samples with one spread. */
export function dfOfChange(vines: DetectableQuestion['vines'], n: number): number {
  return vines === 'new' ? 2 * (n - 1) : n - 1;
}

/** Vines per visit to see a change, not rounded, with the spread taken as known. Example: sd 0.9, 0.5 °Brix → 24.893. */
export function vinesToSeeChangeNormal(question: Omit<DetectableQuestion, 'n' | 'factor'> & { readonly change: number }): number {
  const { sd, vines, confidence, power, change } = question;
  checkMargin(change);
  const quantiles = criticalZ(confidence) + (power === undefined ? 0 : normalUpperQuantile(1 - power));
  return (vines === 'new' ? 2 : 1) * ((quantiles * sd) / change) ** 2;
}

/** Whole vines per visit to see a change; by t when no power is asked for. */
export function vinesToSeeChange(question: Omit<DetectableQuestion, 'n' | 'factor'> & { readonly change: number }): number {
  const normal = vinesToSeeChangeNormal(question);
  if (question.power !== undefined) return Math.max(2, ceilGuarded(normal));
  let n = Math.max(2, Math.floor(normal));
  while (smallestDetectableChange({ ...question, n }) > question.change * (1 + 1e-12)) n += 1;
  return n;
}

/** s√(2(1 − ρ)): spread of the differences of the same vines when their two readings correlate by ρ. */
export function sdOfDifferences(sd: number, correlation: number): number {
  return sd * Math.sqrt(2 * (1 - correlation));
}
