import { AnalysisError } from '../analysis/analysisError.ts';
import { fTails } from './distributions.ts';
import { summarise } from './variances.ts';

/**
 * One-way analysis of variance: do the groups (zones, vines, instruments) differ by more than their insides?
 * Group means are formed after taking off the first value, so that thirteen shared leading digits do no harm.
 * Sources: NIST StRD (sums of squares, F, R²); ω² Hays 1963; variance components by the ANOVA estimator.
 */
export interface OneWayAnova {
  readonly n: number;
  readonly groups: number;
  readonly ssBetween: number;
  readonly dfBetween: number;
  readonly msBetween: number;
  readonly ssWithin: number;
  readonly dfWithin: number;
  readonly msWithin: number;
  readonly f: number;
  readonly p: number;
  readonly rSquared: number;
  readonly adjustedRSquared: number;
  readonly omegaSquared: number;
  /** Typical group size m₀ = (n − Σm²/n)/(k − 1). */
  readonly typicalSize: number;
  /** (MSB − MSW)/m₀; negative means no difference was found. */
  readonly betweenComponent: number;
  /** ρ = between/(between + within); negative estimates are returned as they are. */
  readonly intraClass: number;
}

/** Groups without readings are left out; at least two groups and one repeated reading are needed. */
export function oneWayAnova(groups: readonly (readonly number[])[]): OneWayAnova {
  const used = groups.filter((group) => group.length > 0);
  const n = used.reduce((sum, group) => sum + group.length, 0);
  const k = used.length;
  if (k < 2 || n <= k) {
    throw new AnalysisError('too_few_groups', `Comparing groups needs at least 2 groups and more readings than groups; got ${n} readings in ${k} groups.`);
  }
  const origin = used[0]![0]!;
  return compareMeans(used.map((group) => summarise(group.map((value) => value - origin))));
}

/** The same from n, mean and variance of each group, where the readings themselves are not at hand. */
export function compareMeans(summaries: readonly { readonly n: number; readonly mean: number; readonly variance: number }[]): OneWayAnova {
  const n = summaries.reduce((sum, group) => sum + group.n, 0);
  const k = summaries.length;
  const grandMean = summaries.reduce((sum, group) => sum + group.n * group.mean, 0) / n;
  const ssBetween = summaries.reduce((sum, group) => sum + group.n * (group.mean - grandMean) ** 2, 0);
  const ssWithin = summaries.reduce((sum, group) => sum + (group.n > 1 ? (group.n - 1) * group.variance : 0), 0);
  const dfBetween = k - 1;
  const dfWithin = n - k;
  const msBetween = ssBetween / dfBetween;
  const msWithin = ssWithin / dfWithin;
  const total = ssBetween + ssWithin;
  const typicalSize = (n - summaries.reduce((sum, group) => sum + group.n * group.n, 0) / n) / dfBetween;
  const f = msBetween / msWithin;
  return {
    n,
    groups: k,
    ssBetween,
    dfBetween,
    msBetween,
    ssWithin,
    dfWithin,
    msWithin,
    f,
    p: fTails(f, dfBetween, dfWithin).upper,
    rSquared: ssBetween / total,
    adjustedRSquared: 1 - ((ssWithin / dfWithin) * (n - 1)) / total,
    omegaSquared: (ssBetween - dfBetween * msWithin) / (total + msWithin),
    typicalSize,
    betweenComponent: (msBetween - msWithin) / typicalSize,
    intraClass: (msBetween - msWithin) / (msBetween + (typicalSize - 1) * msWithin),
  };
}
