import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { changeBetween, changeOfSameVines, changeWithCommonSpread, sdOfDifferences, smallestDetectableChange, vinesToSeeChange, vinesToSeeChangeNormal, wordForChange } from '../../shared/sampling/change.ts';
import { meanEstimate } from '../../shared/sampling/precision.ts';
import { sdAboveRounding, summarise } from '../../shared/sampling/variances.ts';
import { detectionPower } from '../../shared/sampling/power.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

const BEFORE = [21.2, 22.0, 20.8, 22.5, 21.7, 22.1];
const AFTER = [22.0, 22.6, 21.9, 23.1, 22.2, 23.0];

describe('smallest detectable change', () => {
  it('gives the values of R for ten new vines at each visit', () => {
    // R 4.2.2
    const question = { sd: 0.9, n: 10, vines: 'new', confidence: 0.95 } as const;
    expectRelative(smallestDetectableChange(question), 0.845605, 1e-6);
    expectRelative(smallestDetectableChange({ ...question, factor: 'z' }), 0.78887, 1e-6);
    expectRelative(smallestDetectableChange({ ...question, power: 0.8 }), 1.127616, 1e-6);
  });

  it('that is noticed in a chosen share of visits follows from two factors of Student', () => {
    // t tables: 18 degrees of freedom, 2.101 at 2.5 % and 0.862 at 20 %, 1.330 at 10 %.
    const question = { sd: 0.9, n: 10, vines: 'new', confidence: 0.95, factor: 't' } as const;
    expectRelative(smallestDetectableChange({ ...question, power: 0.8 }), (2.101 + 0.862) * 0.9 * Math.sqrt(0.2), 3e-4);
    expectRelative(smallestDetectableChange({ ...question, power: 0.9 }), (2.101 + 1.33) * 0.9 * Math.sqrt(0.2), 3e-4);
    expectRelative(smallestDetectableChange({ ...question, power: 0.5 }), smallestDetectableChange(question), 1e-9);
    // Against the exact power of a test of pairs by the noncentral t.
    for (const n of [6, 12, 40]) {
      const difference = smallestDetectableChange({ ...question, n, vines: 'same', power: 0.8 });
      expect(Math.abs(detectionPower({ spread: 0.9, difference, alpha: 0.05, power: 0.8, sides: 2 }, n) - 0.8)).toBeLessThan(0.02);
    }
  });

  it('says how many vines show half a degree', () => {
    // R 4.2.2
    const question = { sd: 0.9, vines: 'new', confidence: 0.95, change: 0.5 } as const;
    expectRelative(vinesToSeeChangeNormal(question), 24.893, 2e-5);
    expectRelative(vinesToSeeChangeNormal({ ...question, power: 0.8 }), 50.861, 2e-5);
    expect(vinesToSeeChange({ ...question, power: 0.8 })).toBe(51);
    const n = vinesToSeeChange(question);
    expect(smallestDetectableChange({ ...question, n })).toBeLessThanOrEqual(0.5);
    expect(smallestDetectableChange({ ...question, n: n - 1 })).toBeGreaterThan(0.5);
  });

  it('gives neutral words to a change of 0.4 °Brix when each visit has a standard error of 0.25', () => {
    // 0.69 with the normal, 0.79 with 10 degrees of freedom: computed by script, independent of this code
    const known = changeBetween({ value: 22, standardError: 0.25, df: Infinity }, { value: 22.4, standardError: 0.25, df: Infinity }, 0.95);
    expect(known.detectable).toBeCloseTo(0.69, 2);
    const estimated = changeBetween({ value: 22, standardError: 0.25, df: 5 }, { value: 22.4, standardError: 0.25, df: 5 }, 0.95);
    expect(estimated.df).toBeCloseTo(10, 9);
    expect(estimated.detectable).toBeCloseTo(0.79, 2);
    expect([known.word, estimated.word]).toEqual(['notDistinguishable', 'notDistinguishable']);
    expect(changeBetween({ value: 22, standardError: 0.25, df: 5 }, { value: 22.8, standardError: 0.25, df: 5 }, 0.95).word).toBe('higher');
    expect(changeBetween({ value: 22, standardError: 0.25, df: 5 }, { value: 21.2, standardError: 0.25, df: 5 }, 0.95).word).toBe('lower');
  });
});

describe('change between two visits', () => {
  it('is sharper when the same vines were read', () => {
    // R 4.2.2 t.test, paired and with equal variances
    const paired = changeOfSameVines(BEFORE, AFTER, 0.95);
    expectRelative(paired.value, 0.75, 1e-12);
    expectRelative(paired.standardError * Math.sqrt(6), 0.225831796, 1e-8);
    expectRelative(paired.lower, 0.513004, 1e-5);
    expectRelative(paired.upper, 0.986996, 1e-6);
    const independent = changeWithCommonSpread(summarise(BEFORE), summarise(AFTER), 0.95);
    expectRelative(independent.lower, 0.015315, 1e-4);
    expectRelative(independent.upper, 1.484685, 1e-6);
  });

  it('equal readings are not known to the last digit: rounding keeps a spread of step/√12', () => {
    // 3 readings at a step of 0.1: t(0.975; 2) = 4.302653, 0.1/√12 = 0.0288675 (JCGM 100:2008 §4.3.7).
    expect(sdAboveRounding(0, 0.1)).toBeCloseTo(0.0288675, 7);
    expect(sdAboveRounding(0.4, 0.1)).toBe(0.4);
    expect(sdAboveRounding(Number.NaN, 0.1)).toBeNaN();
    // Both ends of a difference were rounded: 0.0288675·√2/√3·4.302653 = 0.101415.
    const equal = changeOfSameVines([20, 20, 20], [20.1, 20.1, 20.1], 0.95, 0.1);
    expect(equal.halfWidth).toBeCloseTo(0.101415, 5);
    expect(equal.word).toBe('notDistinguishable');
  });

  it('follows Welch where the spreads differ', () => {
    // R 4.2.2 t.test(after, before)
    const welch = changeBetween(meanEstimate(summarise(BEFORE)), meanEstimate(summarise(AFTER)), 0.95);
    expectRelative(welch.df, 9.63481601304, 1e-10);
    expectRelative(welch.lower, 0.0115225011438, 1e-9);
    expectRelative(welch.upper, 1.48847749886, 1e-10);
  });

  it('claims nothing from a single reading', () => {
    expect(changeOfSameVines([22], [25], 0.95).word).toBe('notDistinguishable');
    expect(changeBetween({ value: 22, standardError: Number.NaN, df: 0 }, { value: 25, standardError: 0.1, df: 9 }, 0.95).word).toBe('notDistinguishable');
    expect(wordForChange({ lower: Number.NaN, upper: Number.NaN })).toBe('notDistinguishable');
  });

  it('raises a false alarm at the nominal rate and no more often', () => {
    const random = seededRandom(31);
    const visit = (n: number) => Array.from({ length: n }, () => 22 + 0.9 * randomNormal(random));
    let alarms = 0;
    const trials = 20_000;
    for (let trial = 0; trial < trials; trial++) {
      const change = changeBetween(meanEstimate(summarise(visit(8))), meanEstimate(summarise(visit(12))), 0.95);
      if (change.word !== 'notDistinguishable') alarms += 1;
    }
    // Binomial sd 0.0015 at 5 %
    expect(alarms / trials).toBeGreaterThan(0.045);
    expect(alarms / trials).toBeLessThan(0.055);
  });

  it('shrinks with the correlation of the same vines', () => {
    expectRelative(sdOfDifferences(0.9, 0.5), 0.9, 1e-12);
    expect(sdOfDifferences(0.9, 1)).toBe(0);
  });
});
