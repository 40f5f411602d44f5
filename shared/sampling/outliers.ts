import { medianSorted } from 'simple-statistics';
import { studentTUpperQuantile } from './quantiles.ts';
import { summarise } from './variances.ts';

/**
 * Values far from the rest. They are flagged, never deleted: whoever plans sees the spread with and without them.
 * Modified z = 0.6745(x − median)/MAD, flagged beyond 3.5 (Iglewicz & Hoaglin 1993; NIST/SEMATECH e-Handbook 1.3.5.17).
 */
const OUTLIER_LIMIT = 3.5;

/** Median absolute deviation to standard deviation for normal data: 1/Φ⁻¹(0.75), to the digits usually printed. */
const MAD_TO_SD = 1.4826;
const MAD_FACTOR = 0.6745;
/** √(π/2): mean absolute deviation to standard deviation, used when more than half of the values are equal. */
const MEAN_DEVIATION_TO_SD = 1.253314;

export interface OutlierOptions {
  readonly limit?: number;
  /** Step of the instrument: the scale is never taken below resolution/√12, the sd of rounding alone. */
  readonly resolution?: number;
}

export interface OutlierReport {
  readonly median: number;
  /** Median absolute deviation as it is, and scaled to a standard deviation. */
  readonly mad: number;
  readonly scaledMad: number;
  readonly scores: readonly number[];
  readonly flagged: readonly boolean[];
}

/** Example: 95.7 among nine values near 100 scores −19.3. All values equal: nothing is flagged. */
export function flagOutliers(values: readonly number[], options: OutlierOptions = {}): OutlierReport {
  const { limit = OUTLIER_LIMIT, resolution = 0 } = options;
  if (values.length === 0) return { median: Number.NaN, mad: Number.NaN, scaledMad: Number.NaN, scores: [], flagged: [] };
  const median = medianOf(values);
  const distances = values.map((value) => Math.abs(value - median));
  const mad = medianOf(distances);
  const scale = Math.max(robustScale(distances), resolution / Math.sqrt(12));
  const scores = values.map((value) => (scale > 0 ? (value - median) / scale : 0));
  return { median, mad, scaledMad: MAD_TO_SD * mad, scores, flagged: scores.map((score) => Math.abs(score) > limit) };
}

function medianOf(values: readonly number[]): number {
  return medianSorted([...values].sort((a, b) => a - b));
}

const MOST_FLAGGED = 0.25;

/**
 * Flags readings against the rest of their own group, with one scale for all groups: groups of three or four are
 * too small for a scale of their own. The reading nearest to its group's median is nearly 0 from it by construction
 * and would shrink the scale, so it is left out of it; an even group is stretched by √(n/(n−1)) for the same reason.
 * With `relative`, distances are taken as shares of the group's median. The correction is ours, checked by simulation.
 * Where more than a quarter of a group lies far off, it is a second population and no outlier (judgement): none is flagged.
 */
export function flagWithinGroups(groups: readonly (readonly number[])[], options: OutlierOptions & { readonly relative?: boolean } = {}): boolean[][] {
  const { limit = OUTLIER_LIMIT, resolution = 0, relative = false } = options;
  const distances: number[] = [];
  const scored = groups.map((group) => {
    if (group.length < 2) return group.map(() => 0);
    const median = medianOf(group);
    const unit = relative ? Math.abs(median) || 1 : 1;
    const stretch = group.length % 2 === 0 ? Math.sqrt(group.length / (group.length - 1)) : 1;
    const own = group.map((value) => (stretch * (value - median)) / unit);
    const sizes = own.map(Math.abs).sort((a, b) => a - b);
    distances.push(...sizes.slice(1));
    return own;
  });
  const floor = relative ? 0 : resolution / Math.sqrt(12);
  const scale = distances.length === 0 ? 0 : Math.max(robustScale(distances), floor);
  return scored.map((group) => {
    const flags = group.map((distance) => scale > 0 && Math.abs(distance) / scale > limit);
    const isPopulation = flags.filter(Boolean).length > Math.max(1, MOST_FLAGGED * group.length);
    return isPopulation ? flags.map(() => false) : flags;
  });
}

/** Of distances from a median: by their median, or by their mean where more than half are 0 (figures of a coarse instrument). */
function robustScale(distances: readonly number[]): number {
  const median = medianOf(distances);
  return median > 0 ? median / MAD_FACTOR : (MEAN_DEVIATION_TO_SD * distances.reduce((sum, distance) => sum + distance, 0)) / distances.length;
}

export interface GrubbsTest {
  /** Largest distance from the mean in standard deviations. */
  readonly g: number;
  readonly critical: number;
  /** Which value it is. */
  readonly index: number;
  readonly isOutlier: boolean;
}

/** Grubbs 1950, Ann. Math. Statist. 21:27, two-sided, for one suspected value; null below three readings or without spread. */
export function grubbsTest(values: readonly number[], alpha = 0.05): GrubbsTest | null {
  const { n, mean, sd } = summarise(values);
  if (n < 3 || !(sd > 0)) return null;
  const distances = values.map((value) => Math.abs(value - mean));
  const largest = Math.max(...distances);
  const t = studentTUpperQuantile(alpha / (2 * n), n - 2);
  const g = largest / sd;
  const critical = ((n - 1) / Math.sqrt(n)) * Math.sqrt((t * t) / (n - 2 + t * t));
  return { g, critical, index: distances.indexOf(largest), isOutlier: g > critical };
}

/** Positions of values outside the plausible range of a measure, or not numbers at all. */
export function outsideRange(values: readonly number[], range: { readonly min: number; readonly max: number }): number[] {
  return values.flatMap((value, i) => (value >= range.min && value <= range.max ? [] : [i]));
}
