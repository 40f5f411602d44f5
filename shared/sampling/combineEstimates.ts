import { AnalysisError } from '../analysis/analysisError.ts';
import type { Estimate } from './precision.ts';

/**
 * Estimates put together: errors add in squares, degrees of freedom follow Satterthwaite 1946 (Biometrics Bulletin
 * 2:110). All estimates are taken as independent of each other.
 */

/** Weighted mean of independent estimates with fixed weights. */
export function weightedEstimate(parts: readonly { readonly weight: number; readonly estimate: Estimate }[]): Estimate {
  const total = parts.reduce((sum, part) => sum + part.weight, 0);
  if (!(total > 0)) throw new AnalysisError('no_weight', 'A weighted mean needs weights that add up to more than 0.');
  return combineLinearly(parts.map((part) => ({ factor: part.weight / total, estimate: part.estimate })));
}

/** Σ factor·estimate of independent estimates, with the variance and degrees of freedom of the sum. */
export function combineLinearly(terms: readonly { readonly factor: number; readonly estimate: Estimate }[]): Estimate {
  let value = 0;
  let variance = 0;
  let satterthwaite = 0;
  for (const { factor, estimate } of terms) {
    if (factor === 0) continue;
    value += factor * estimate.value;
    const part = (factor * estimate.standardError) ** 2;
    variance += part;
    if (part > 0) satterthwaite += (part * part) / estimate.df;
  }
  const df = satterthwaite === 0 ? Infinity : (variance * variance) / satterthwaite;
  return { value, standardError: Math.sqrt(variance), df };
}

/** Product of independent estimates, first-order error (law of propagation, e.g. JCGM 100:2008 §5.1). */
export function multiplyEstimates(factors: readonly Estimate[]): Estimate {
  const value = factors.reduce((product, factor) => product * factor.value, 1);
  const terms = factors.map((estimate, i) => ({
    factor: factors.reduce((product, other, j) => (i === j ? product : product * other.value), 1),
    estimate,
  }));
  return { ...combineLinearly(terms), value };
}

/** A number taken as exactly known. */
export function exactly(value: number): Estimate {
  return { value, standardError: 0, df: Infinity };
}
