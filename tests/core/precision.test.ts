import { describe, expect, it } from 'vitest';
import { combineLinearly, multiplyEstimates, weightedEstimate } from '../../shared/sampling/combineEstimates.ts';
import { stratifiedEstimate } from '../../shared/sampling/stratified.ts';
import { howManyMore, intervalOf, meanInterval } from '../../shared/sampling/precision.ts';
import { criticalT } from '../../shared/sampling/quantiles.ts';
import { summarise } from '../../shared/sampling/variances.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

const BRIX = [22.1, 23.4, 21.8, 22.9, 23.0, 22.4, 21.6, 23.7, 22.5, 22.8];

describe('interval of a mean', () => {
  it('gives the values of R for ten °Brix readings, with and without 60 vines', () => {
    // R 4.2.2 t.test; the last case multiplied by sqrt(1 - 10/60)
    const facts = summarise(BRIX);
    expectRelative(facts.mean, 22.62, 1e-12);
    expectRelative(facts.sd, 0.672970199, 1e-8);
    expectRelative(facts.variance, 0.452888889, 1e-8);
    const at95 = meanInterval(facts, 0.95);
    expectRelative(at95.standardError, 0.212811863, 1e-8);
    expect(at95.df).toBe(9);
    expectRelative(at95.lower, 22.138586, 1e-7);
    expectRelative(at95.upper, 23.101414, 1e-7);
    const at90 = meanInterval(facts, 0.9);
    expectRelative(at90.lower, 22.229892, 1e-7);
    expectRelative(at90.upper, 23.010108, 1e-7);
    const of60 = meanInterval({ ...facts, populationSize: 60 }, 0.95);
    expectRelative(of60.lower, 22.180531, 1e-7);
    expectRelative(of60.upper, 23.059469, 1e-7);
  });

  it('gives the handbook interval for the ZARR13 set', () => {
    // NIST/SEMATECH e-Handbook 1.3.5.2 (figures from memory), recomputed with R 4.2.2
    const interval = meanInterval({ n: 195, mean: 9.26146, sd: 0.02278881 }, 0.95);
    expectRelative(interval.lower, 9.258242, 1e-7);
    expectRelative(interval.upper, 9.264679, 1e-7);
    expectRelative(criticalT(0.95, 194), 1.972268, 1e-6);
  });

  it('gives the interval of the NIST Michelso set when its values are taken as independent', () => {
    // Certified mean and sd; interval computed with R 4.2.2
    const interval = meanInterval({ n: 100, mean: 299.8524, sd: 0.0790105478190518 }, 0.95);
    expectRelative(interval.lower, 299.836723, 1e-8);
    expectRelative(interval.upper, 299.868077, 1e-8);
  });

  it('has no width when every vine was read, and none to show with a single reading', () => {
    expect(meanInterval({ n: 12, mean: 3, sd: 1, populationSize: 12 }, 0.95)).toMatchObject({ halfWidth: 0, lower: 3, upper: 3 });
    expect(meanInterval({ n: 1, mean: 3, sd: Number.NaN }, 0.95).halfWidth).toBeNaN();
  });
});

describe('how many more', () => {
  it('says 7 more bags for six readings with a spread of 0.8', () => {
    // Computed by script from the t formula, independent of this code
    const answer = howManyMore({ n: 6, spread: 0.8, margin: 0.5, confidence: 0.95 });
    expect(answer.halfWidthNow).toBeCloseTo(0.84, 2);
    expect(answer).toMatchObject({ more: 7, enough: false });
    expect(answer.needed.n).toBe(13);
  });

  it('says enough when the margin is kept, and asks for all vines of a small zone at most', () => {
    expect(howManyMore({ n: 13, spread: 0.8, margin: 0.5, confidence: 0.95 })).toMatchObject({ more: 0, enough: true });
    expect(howManyMore({ n: 6, spread: 9, margin: 0.5, confidence: 0.95, populationSize: 20 }).more).toBe(14);
  });
});

describe('mean over zones', () => {
  const zones = [
    { weight: 900, n: 14, mean: 22.4, variance: 1.21 },
    { weight: 600, n: 8, mean: 23.8, variance: 0.64 },
    { weight: 300, n: 8, mean: 21.0, variance: 2.25 },
  ];

  it('weighs zones by vines and takes degrees of freedom after Satterthwaite', () => {
    // Cochran 1977 ch. 5, computed with R 4.2.2
    const estimate = stratifiedEstimate(zones);
    expectRelative(estimate.value, 22.633333, 1e-7);
    expectRelative(estimate.standardError ** 2, 0.0376455688, 1e-8);
    expectRelative(estimate.standardError, 0.19402466, 1e-7);
    expectRelative(estimate.df, 26.21834, 1e-6);
    const interval = intervalOf(estimate, 0.95);
    expectRelative(interval.lower, 22.234672, 1e-7);
    expectRelative(interval.upper, 23.031995, 1e-7);
  });

  it('reproduces the total farm acreage of a textbook example', () => {
    // Lohr, Sampling: Design and Analysis (inputs from memory), computed with R 4.2.2; the book prints 909 736 035
    const regions = [
      { weight: 220, n: 21, mean: 97629.8, variance: 7647472708 },
      { weight: 1054, n: 103, mean: 300504.2, variance: 29618183543 },
      { weight: 1382, n: 135, mean: 211315.0, variance: 53587487856 },
      { weight: 422, n: 41, mean: 662295.5, variance: 396185950266 },
    ];
    const estimate = stratifiedEstimate(regions);
    expectRelative(estimate.value, 295560.76, 1e-7);
    expectRelative(estimate.standardError, 16379.87, 1e-6);
    expectRelative(estimate.value * 3078, 909736014, 1e-7);
    expectRelative(estimate.standardError * 3078, 50417248, 1e-6);
  });

  it('is the same whether the parts are given as samples or as estimates', () => {
    const estimate = stratifiedEstimate(zones);
    const parts = zones.map((zone) => ({
      weight: zone.weight,
      estimate: { value: zone.mean, standardError: Math.sqrt((zone.variance / zone.n) * (1 - zone.n / zone.weight)), df: zone.n - 1 },
    }));
    const combined = weightedEstimate(parts);
    expectRelative(combined.value, estimate.value, 1e-14);
    expectRelative(combined.standardError, estimate.standardError, 1e-12);
    expectRelative(combined.df, estimate.df, 1e-12);
  });

  it('knows nothing of a zone with one reading, and says so instead of calling it exact', () => {
    expect(stratifiedEstimate([zones[0]!, { weight: 600, n: 1, mean: 23, variance: Number.NaN }]).standardError).toBeNaN();
    expect(() => stratifiedEstimate([])).toThrow('add up to 0');
  });

  it('subtracts estimates without subtracting their errors', () => {
    const difference = combineLinearly([
      { factor: 1, estimate: { value: 24, standardError: 0.3, df: Infinity } },
      { factor: -1, estimate: { value: 23, standardError: 0.4, df: Infinity } },
    ]);
    expect(difference.value).toBe(1);
    expectRelative(difference.standardError, 0.5, 1e-12);
    expect(difference.df).toBe(Infinity);
  });

  it('multiplies estimates with their relative errors added in squares', () => {
    // By hand: 3 % and 4 % make 5 %
    const product = multiplyEstimates([
      { value: 20, standardError: 0.6, df: Infinity },
      { value: 50, standardError: 2, df: Infinity },
    ]);
    expect(product.value).toBe(1000);
    expectRelative(product.standardError, 50, 1e-12);
  });
});
