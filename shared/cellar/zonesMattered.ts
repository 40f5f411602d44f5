import { compareMeans } from '../sampling/anova.ts';
import { combineLinearly } from '../sampling/combineEstimates.ts';
import type { Estimate } from '../sampling/precision.ts';
import { criticalT } from '../sampling/quantiles.ts';

/**
 * Did the zones of a block differ? Several measures and several pairs of zones are looked at, so each is asked more
 * strictly (Bonferroni, Dunn 1961, J. Am. Stat. Assoc. 56:52): zones are not kept by luck.
 */
export interface ZoneMean {
  readonly zone: number;
  readonly n: number;
  readonly sd: number;
  readonly estimate: Estimate;
}

export interface ZonesCompared {
  readonly lowest: number;
  readonly highest: number;
  /** Zone that is highest less zone that is lowest, with its half-width over all pairs and measures asked. */
  readonly difference: number;
  readonly halfWidth: number | null;
  /** Of no difference at all; null where it cannot be told. */
  readonly p: number | null;
  /** The means differ by more than luck as a whole, and so do the highest and the lowest by their own range. */
  readonly differ: boolean | null;
  /** Smallest difference that would have been seen with these readings. */
  readonly detectable: number | null;
}

/** At least two zones. `asked`: how many measures are looked at beside this one, itself included. */
export function zonesCompared(means: readonly ZoneMean[], { confidence, asked }: { readonly confidence: number; readonly asked: number }): ZonesCompared {
  const sorted = [...means].sort((a, b) => a.estimate.value - b.estimate.value);
  const [low, high] = [sorted[0]!, sorted.at(-1)!];
  const pairs = (means.length * (means.length - 1)) / 2;
  const level = (1 - confidence) / asked;
  const gap = combineLinearly([{ factor: 1, estimate: high.estimate }, { factor: -1, estimate: low.estimate }]);
  const half = gap.df > 0 && Number.isFinite(gap.standardError) ? criticalT(1 - level / pairs, gap.df) * gap.standardError : Number.NaN;
  const canTest = means.every(({ n, sd }) => n >= 2 && sd >= 0) && means.some(({ sd }) => sd > 0);
  const p = canTest ? compareMeans(means.map(({ n, sd, estimate }) => ({ n, mean: estimate.value, variance: sd * sd }))).p : Number.NaN;
  const told = (value: number) => (Number.isNaN(value) ? null : value);
  // Both must say so: a difference whose printed range holds 0 would contradict its own verdict.
  const differ = Number.isNaN(p) ? null : p < level && (Number.isNaN(half) || gap.value > half);
  return { lowest: low.zone, highest: high.zone, difference: gap.value, halfWidth: told(half), p: told(p), differ, detectable: told(half) };
}

export type ZoneVerdict = 'keep' | 'merge' | 'retire' | 'notRead' | 'oneZone';

/** Retired are zones that two seasons in a row could not tell apart; after one such season merging is advised. */
export function zoneVerdict(facts: { readonly zones: number; readonly thisSeason: boolean | null; readonly lastSeason: boolean | null }): ZoneVerdict {
  if (facts.zones < 2) return 'oneZone';
  if (facts.thisSeason === null) return 'notRead';
  if (facts.thisSeason) return 'keep';
  return facts.lastSeason === false ? 'retire' : 'merge';
}
