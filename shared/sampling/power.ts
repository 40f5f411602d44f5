import { checkMargin, checkSpread } from './margins.ts';
import { noncentralTLower } from './distributions.ts';
import { normalUpperQuantile, studentTUpperQuantile } from './quantiles.ts';

/**
 * How many readings to notice a difference Δ from a fixed value with a wanted chance.
 * n = (s/Δ)²(q_α + q_β)², NIST/SEMATECH e-Handbook §7.2.2.2; exact form by the noncentral t.
 */
export interface DetectionQuestion {
  readonly spread: number;
  readonly difference: number;
  /** Accepted chance of a false alarm. */
  readonly alpha: number;
  /** Wanted chance of noticing the difference. */
  readonly power: number;
  readonly sides: 1 | 2;
}

/** With normal quantiles, not rounded. Example: s 4, Δ 1, one side 5 %, power 80 % → 98.9209. */
export function detectionSizeNormal(question: DetectionQuestion): number {
  const { spread, difference, alpha, power, sides } = question;
  return ((spread / difference) * (normalUpperQuantile(alpha / sides) + normalUpperQuantile(1 - power))) ** 2;
}

/** The same with t quantiles at `df`, not rounded. Example: s = Δ = 1, one side 5 %, power 90 %, df 8 → 10.6039. */
export function detectionSizeAtDf(question: DetectionQuestion, df: number): number {
  const { spread, difference, alpha, power, sides } = question;
  return ((spread / difference) * (studentTUpperQuantile(alpha / sides, df) + studentTUpperQuantile(1 - power, df))) ** 2;
}

/** Smallest whole n that the t form accepts; searched upwards, so it cannot cycle. */
export function detectionSize(question: DetectionQuestion): number {
  checkSpread(question.spread);
  checkMargin(question.difference);
  let n = Math.max(2, Math.floor(detectionSizeNormal(question)));
  while (detectionSizeAtDf(question, n - 1) > n * (1 + 1e-12)) n += 1;
  return n;
}

/** Chance that a t test with n readings notices the difference (n need not be whole). */
export function detectionPower(question: DetectionQuestion, n: number): number {
  const { spread, difference, alpha, sides } = question;
  const noncentrality = (Math.sqrt(n) * difference) / spread;
  const limit = studentTUpperQuantile(alpha / sides, n - 1);
  const above = 1 - noncentralTLower(limit, n - 1, noncentrality);
  return sides === 1 ? above : above + noncentralTLower(-limit, n - 1, noncentrality);
}

/** Smallest whole n whose exact power reaches the wanted chance. */
export function detectionSizeExact(question: DetectionQuestion): number {
  checkSpread(question.spread);
  checkMargin(question.difference);
  let n = Math.max(2, Math.floor(detectionSizeNormal(question)));
  while (detectionPower(question, n) < question.power) n += 1;
  return n;
}
