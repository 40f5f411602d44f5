import { AnalysisError } from '../analysis/analysisError.ts';

/** Half of the wanted interval: in the measure's unit, or as a share of the mean (0.10 is ±10 %). */
export interface Margin {
  readonly kind: 'absolute' | 'relative';
  readonly value: number;
}

/** Vine-to-vine spread: a standard deviation in the measure's unit, or a coefficient of variation (0.25 is 25 %). */
export interface Spread {
  readonly kind: 'sd' | 'cv';
  readonly value: number;
}

/** Spread and margin on one scale: both in the measure's unit, or both as shares of the mean. */
export interface MatchedMargin {
  readonly spread: number;
  readonly margin: number;
}

/**
 * Puts spread and margin on one scale. Sample sizes need only their ratio, so nothing is converted that does
 * not have to be; a mean is needed when one is relative and the other is not.
 */
export function matchMargin(spread: Spread, margin: Margin, mean: number | null): MatchedMargin {
  if (spread.kind === 'sd' && margin.kind === 'absolute') return { spread: spread.value, margin: margin.value };
  if (spread.kind === 'cv' && margin.kind === 'relative') return { spread: spread.value, margin: margin.value };
  const scale = mean === null ? Number.NaN : Math.abs(mean);
  if (!(scale > 0)) {
    throw new AnalysisError('mean_needed', `A ${margin.kind} margin with a spread given as ${spread.kind === 'sd' ? 'a standard deviation' : 'a share of the mean'} needs an expected mean other than 0; got ${mean ?? 'none'}. Enter one.`);
  }
  if (spread.kind === 'cv') return { spread: spread.value * scale, margin: margin.value };
  return { spread: spread.value, margin: margin.value * scale };
}

export function checkConfidence(confidence: number): void {
  if (!(confidence > 0 && confidence < 1)) throw new AnalysisError('bad_confidence', `Confidence must lie between 0 and 1, such as 0.95; got ${confidence}.`);
}

export function checkMargin(margin: number): void {
  if (!(margin > 0 && margin < Infinity)) throw new AnalysisError('bad_margin', `The margin must be above 0; got ${margin}.`);
}

export function checkSpread(spread: number): void {
  if (!(spread >= 0 && spread < Infinity)) throw new AnalysisError('bad_spread', `The spread must be 0 or more; got ${spread}.`);
}

/** Infinity stands for a population that is unknown or not the target. */
export function checkPopulation(populationSize: number): void {
  if (!(populationSize >= 1)) throw new AnalysisError('bad_population', `A zone must hold at least 1 vine; got ${populationSize}.`);
}
