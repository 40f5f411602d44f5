import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { flagOutliers, flagWithinGroups, grubbsTest, outsideRange } from '../../shared/sampling/outliers.ts';
import { groupReadings, poolGroups, type HistoryReading } from '../../shared/sampling/pooling.ts';
import { sdInterval, sdUpperFactor } from '../../shared/sampling/sdInterval.ts';
import { fitVariancePrior, moderateVariance } from '../../shared/sampling/shrinkage.ts';
import { summarise } from '../../shared/sampling/variances.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

function readings(values: readonly number[], where: Partial<HistoryReading> = {}): HistoryReading[] {
  return values.map((value) => ({ block: 'north', zone: '1', season: 2026, visit: '2026-08-20', ...where, value }));
}

describe('pooling of earlier readings', () => {
  it('does not take the difference between two seasons for spread', () => {
    // R 4.2.2; thrown together the eight readings would give 2.313571
    const first = readings([21.2, 22.0, 21.5, 22.3], { season: 2025 });
    const second = readings([24.1, 24.9, 24.4, 24.6], { season: 2026 });
    const groups = groupReadings([...first, ...second]);
    expect(groups).toHaveLength(2);
    expectRelative(summarise(groups[0]!.values).variance, 0.243333, 2e-6);
    expectRelative(summarise(groups[1]!.values).variance, 0.113333, 3e-6);
    const pooled = poolGroups(groups, { kind: 'sd', season: 2026, seasonWeight: 1 });
    expectRelative(pooled.spread ** 2, 0.178333, 2e-6);
    expect(pooled).toMatchObject({ df: 6, n: 8, seasons: [2025, 2026] });
  });

  it('lets older seasons weigh less', () => {
    const groups = groupReadings([...readings([20, 22], { season: 2024 }), ...readings([20, 20.4], { season: 2026 })]);
    const pooled = poolGroups(groups, { kind: 'sd', season: 2026 });
    // By hand: variances 2 and 0.08 with df 0.7² and 1
    expectRelative(pooled.spread ** 2, (0.49 * 2 + 0.08) / 1.49, 1e-12);
    expectRelative(pooled.df, 1.49, 1e-12);
  });

  it('pools shares of the mean where the spread grows with the mean', () => {
    const small = readings([40, 50, 60], { visit: 'a' });
    const large = readings([160, 200, 240], { visit: 'b' });
    const pooled = poolGroups(groupReadings([...small, ...large]), { kind: 'cv', season: 2026 });
    expectRelative(pooled.spread, 0.2, 1e-12); // both groups: sd is a fifth of the mean
  });

  it('keeps zones, blocks, visits and single readings apart', () => {
    const mixed = [...readings([1, 2]), ...readings([5], { zone: '2' }), ...readings([9, 9.5], { block: 'south' })];
    expect(groupReadings(mixed)).toHaveLength(3);
    expect(poolGroups(groupReadings(mixed), { kind: 'sd', season: 2026 })).toMatchObject({ df: 2, n: 4 });
    expect(poolGroups([], { kind: 'sd', season: 2026 }).spread).toBeNaN();
  });
});

describe('shrinkage', () => {
  it('mixes a zone with a fixed prior by degrees of freedom', () => {
    // Formula of Smyth 2004, computed with R 4.2.2
    const prior = { variance: 1.44, df: 6 };
    expectRelative(moderateVariance({ variance: 0.25, df: 2 }, prior).variance, 1.1425, 1e-12);
    expectRelative(moderateVariance({ variance: 3.6, df: 4 }, prior).variance, 2.304, 1e-12);
    expectRelative(moderateVariance({ variance: 3.6, df: 40 }, prior).variance, 3.318261, 1e-6);
    expect(moderateVariance({ variance: Number.NaN, df: 0 }, prior)).toEqual({ variance: 1.44, df: 6 });
  });

  it('estimates the prior from ten zones as limma does', () => {
    // R 4.2.2, limma 3.54.1 squeezeVar
    const variances = [0.35, 1.9, 0.62, 2.8, 0.44, 1.25, 0.9, 4.1, 0.7, 1.6];
    const prior = fitVariancePrior(variances.map((variance) => ({ variance, df: 8 })));
    expectRelative(prior.excessVariance, 0.358796357, 1e-8);
    expectRelative(prior.df, 6.515679, 1e-6);
    expectRelative(prior.variance, 1.067579, 1e-6);
    const posterior = [0.672101, 1.52635, 0.820906, 2.022365, 0.721703, 1.168116, 0.975221, 2.738832, 0.864996, 1.361011];
    variances.forEach((variance, i) => expectRelative(moderateVariance({ variance, df: 8 }, prior).variance, posterior[i]!, 1e-6));
  });

  it('gives all zones one value when they differ by no more than chance', () => {
    // R 4.2.2, limma 3.54.1 gives 1.0 for all
    const variances = [0.9, 1.1, 1.0, 1.2, 0.8];
    const prior = fitVariancePrior(variances.map((variance) => ({ variance, df: 4 })));
    expect(prior.df).toBe(Infinity);
    for (const variance of variances) expectRelative(moderateVariance({ variance, df: 4 }, prior).variance, 1, 1e-12);
  });

  it('weighs by degrees of freedom when the common value comes from uneven zones', () => {
    const prior = fitVariancePrior([{ variance: 1, df: 30 }, { variance: 1.3, df: 2 }, { variance: 0.9, df: 8 }]);
    expect(prior.df).toBe(Infinity);
    expectRelative(prior.variance, (30 + 2.6 + 7.2) / 40, 1e-12);
  });

  it('needs a floor for a zone of identical readings', () => {
    const zones = [{ variance: 0, df: 4 }, { variance: 1, df: 4 }];
    expect(() => fitVariancePrior(zones)).toThrow('identical readings');
    expect(fitVariancePrior(zones, 0.1 ** 2 / 12).variance).toBeGreaterThan(0);
    expect(() => fitVariancePrior([zones[1]!])).toThrow('at least 2 zones');
  });
});

describe('how unsure a spread is', () => {
  it('gives the chi-square interval', () => {
    // R 4.2.2
    const cases = [[5, 0.71896, 3.44827], [10, 0.8254, 2.19073], [30, 0.95569, 1.61318]] as const;
    for (const [n, lower, upper] of cases) {
      const interval = sdInterval(1.2, n - 1, 0.95);
      expectRelative(interval.lower, lower, 1e-5);
      expectRelative(interval.upper, upper, 1e-5);
    }
  });

  it('gives the one-sided 80 % factor for cautious planning', () => {
    // R 4.2.2
    expectRelative(sdUpperFactor(4), 1.557575, 1e-6);
    expectRelative(sdUpperFactor(9), 1.293385, 1e-6);
  });
});

describe('outliers', () => {
  // USP general chapter 1010, example data
  const USP = [100.3, 100.2, 100.1, 100.0, 100.0, 100.0, 99.9, 99.7, 99.5, 95.7];

  it('finds the low value of the pharmacopoeia example', () => {
    // The page prints median 100, MAD 0.15 (scaled 0.22), score 19.33, sd 1.369 and 0.245; its mean of nine, 99.95, is misprinted
    const report = flagOutliers(USP);
    expect(report.median).toBe(100);
    expectRelative(report.mad, 0.15, 1e-9);
    expectRelative(report.scaledMad, 0.22239, 1e-6);
    expect(Math.abs(report.scores[9]!)).toBeCloseTo(19.33, 1);
    expect(report.flagged).toEqual([...Array<boolean>(9).fill(false), true]);
    const all = summarise(USP);
    expectRelative(all.mean, 99.54, 1e-9);
    expectRelative(all.sd, 1.36886, 1e-5);
    const kept = summarise(USP.filter((_, i) => !report.flagged[i]));
    expectRelative(kept.sd, 0.244949, 1e-5);
    expectRelative(kept.mean, 99.96667, 1e-7);
  });

  it('agrees with the test of Grubbs there', () => {
    // R 4.2.2 from the t quantile at 0.05 / 20 with 8 df
    const grubbs = grubbsTest(USP)!;
    expectRelative(grubbs.g, 2.80525, 1e-5);
    expectRelative(grubbs.critical, 2.28995, 1e-5);
    expect(grubbs).toMatchObject({ index: 9, isOutlier: true });
    expect(grubbsTest([1, 2])).toBeNull();
    expect(grubbsTest([3, 3, 3])).toBeNull();
  });

  it('falls back when more than half of the readings are equal', () => {
    const coarse = flagOutliers([22, 22, 22, 22, 22, 22.2, 30], { resolution: 0.2 });
    expect(coarse.mad).toBe(0);
    expect(coarse.flagged).toEqual([false, false, false, false, false, false, true]);
    expect(flagOutliers([22, 22, 22]).flagged).toEqual([false, false, false]);
    expect(flagOutliers([]).flagged).toEqual([]);
  });

  it('keeps rounding steps out of the outliers', () => {
    const rounded = [22, 22, 22, 22.5, 22, 22, 22, 22, 22, 22, 22, 22, 22, 22, 22, 22];
    expect(flagOutliers(rounded).flagged[3]).toBe(true);
    expect(flagOutliers(rounded, { resolution: 0.5 }).flagged[3]).toBe(false);
  });

  it('are seen where most readings of the day are equal, and only the far one', () => {
    const [same, coarse] = [Array.from({ length: 15 }, () => 22.4), [21.9, 22, 21.7, 22.5, 22.4, 22.3, 22, 22, 22.1, 29.9]];
    expect(flagWithinGroups([same, same, coarse], { resolution: 0.1 })[2]!.flatMap((flagged, i) => (flagged ? [i] : []))).toEqual([9]);
    expect(flagWithinGroups([same, same], { resolution: 0.1 }).flat().some(Boolean)).toBe(false);
  });

  it('finds a misread vine among small groups of different dates', () => {
    const groups = [[18.1, 18.6, 17.9], [21.2, 12.2, 21.7, 21.0], [23.9, 24.4, 23.5], [20.2]];
    expect(flagWithinGroups(groups)).toEqual([[false, false, false], [false, true, false, false], [false, false, false], [false]]);
  });

  it('takes a second population for what it is: half a visit is no outlier, one reading in ten is', () => {
    const earlier = [39, 40, 41, 40, 42, 38, 40, 41];
    const two = [12, 40, 13, 41, 14, 42, 15, 40];
    expect(flagWithinGroups([earlier, two], { relative: true }).flat().some(Boolean)).toBe(false);
    const one = [40, 41, 39, 40, 42, 12, 40, 41, 39, 40];
    expect(flagWithinGroups([earlier, one], { relative: true })[1]!.flatMap((flagged, i) => (flagged ? [i] : []))).toEqual([5]);
  });

  it('flags hardly any healthy reading, whatever the group size', () => {
    const random = seededRandom(11);
    for (const size of [2, 3, 4, 5, 8, 15]) {
      const groups = Array.from({ length: 4000 }, () => Array.from({ length: size }, () => 20 + randomNormal(random)));
      const rate = flagWithinGroups(groups).flat().filter(Boolean).length / (4000 * size);
      // A lone normal reading lies beyond 3.5 scaled MAD with chance 0.00047; small groups come out up to four times that.
      expect(rate).toBeLessThan(0.0025);
    }
  });

  it('lists readings outside the plausible range, missing ones included', () => {
    expect(outsideRange([22, -1, 40.1, Number.NaN, 0], { min: 0, max: 40 })).toEqual([1, 2, 3]);
  });
});
