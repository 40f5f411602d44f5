import { describe, expect, it } from 'vitest';
import { matchMargin } from '../../shared/sampling/margins.ts';
import { detectionPower, detectionSize, detectionSizeAtDf, detectionSizeExact, detectionSizeNormal } from '../../shared/sampling/power.ts';
import { ceilGuarded, correctForPopulation, halfWidth, normalSampleSize, normalSampleSizeWhole, sampleSize, sampleSizeSteps, steinSampleSize } from '../../shared/sampling/sampleSize.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

describe('normal sample size', () => {
  it('gives the values of R for four confidences at s = 1.5, margin 0.5', () => {
    // R 4.2.2: (qnorm((1 + c) / 2) * 1.5 / 0.5)^2
    const computed = [[0.9, 24.349891, 25], [0.95, 34.573129, 35], [0.98, 48.70705, 49], [0.99, 59.714069, 60]] as const;
    for (const [confidence, unrounded, whole] of computed) {
      expectRelative(normalSampleSize({ spread: 1.5, margin: 0.5, confidence }), unrounded, 1e-7);
      expect(normalSampleSizeWhole({ spread: 1.5, margin: 0.5, confidence })).toBe(whole);
    }
  });

  it('shrinks for a finite population', () => {
    // Cochran 1977 section 4.6, computed with R 4.2.2
    expectRelative(correctForPopulation(34.573129, 200), 29.477485, 1e-7);
    expect(normalSampleSizeWhole({ spread: 1.5, margin: 0.5, confidence: 0.95, populationSize: 200 })).toBe(30);
    // 260 of 800 vines at 5 %: the figure of Washington State University extension (topic 7-06), here from CV 50 %
    expectRelative(normalSampleSize({ spread: 0.5, margin: 0.05, confidence: 0.95 }), 384.145882, 1e-8);
    expectRelative(correctForPopulation(384.145882, 800), 259.526, 1e-6);
    expect(normalSampleSizeWhole({ spread: 0.5, margin: 0.05, confidence: 0.95, populationSize: 800 })).toBe(260);
  });

  it('takes relative spread and margin in the same form', () => {
    // R 4.2.2; the second case has the inputs of Brus, Spatial Sampling with R, ch. 12
    expectRelative(normalSampleSize({ spread: 0.25, margin: 0.1, confidence: 0.95 }), 24.009118, 1e-7);
    expectRelative(normalSampleSize({ spread: 0.5, margin: 0.1, confidence: 0.95 }), 96.036471, 1e-7);
    expect(normalSampleSizeWhole({ spread: 0.5, margin: 0.1, confidence: 0.95 })).toBe(97);
    expectRelative(normalSampleSize({ spread: 0.065, margin: 0.02, confidence: 0.9 }), 28.577303, 1e-7);
    expect(normalSampleSizeWhole({ spread: 0.065, margin: 0.02, confidence: 0.9 })).toBe(29);
  });

  it('does not round 100 up to 101 because of the last bit', () => {
    const inDoubles = ((1.96 * 10) / 1.96) ** 2;
    expect(inDoubles).toBeGreaterThan(100);
    expect(ceilGuarded(inDoubles)).toBe(100);
    expect(ceilGuarded(((1.645 * 3) / 0.4935) ** 2)).toBe(100);
    expect(ceilGuarded(100.001)).toBe(101);
  });
});

describe('sample size with an estimated spread', () => {
  it('gives the smallest n whose t interval keeps the margin', () => {
    // R 4.2.2: smallest n with qt((1 + c) / 2, n - 1) * s / sqrt(n) <= E
    const computed = [
      [0.95, 1.5, 0.5, 38, 0.493037732],
      [0.9, 1.5, 0.5, 27, 0.492369483],
      [0.99, 1.5, 0.5, 64, 0.498027192],
      [0.95, 1.2, 0.5, 25, 0.495335655],
      [0.95, 0.25, 0.1, 27, 0.09889670623],
      [0.99, 1, 1, 11, 0.955571665],
    ] as const;
    for (const [confidence, spread, margin, n, width] of computed) {
      const answer = sampleSize({ spread, margin, confidence });
      expect(answer.n).toBe(n);
      expectRelative(answer.halfWidth, width, 1e-8);
    }
  });

  it('ends where the fixed-point loop would jump between 2 and 41', () => {
    expect(sampleSize({ spread: 1, margin: 2, confidence: 0.95 }).n).toBe(4); // R 4.2.2 by search
  });

  it('depends only on the ratio of spread and margin', () => {
    expect(sampleSize({ spread: 0.15, margin: 0.05, confidence: 0.95 }).n).toBe(38);
    for (const scale of [1e-9, 1e-3, 7, 1e6]) expect(sampleSize({ spread: 1.5 * scale, margin: 0.5 * scale, confidence: 0.95 }).n).toBe(38);
  });

  it('searches with the population correction inside', () => {
    // R 4.2.2 by search
    expect(sampleSize({ spread: 1.1, margin: 0.5, confidence: 0.95, populationSize: 900 }).n).toBe(21);
    expect(sampleSize({ spread: 0.8, margin: 0.5, confidence: 0.95, populationSize: 600 }).n).toBe(13);
    expect(sampleSize({ spread: 1.5, margin: 0.5, confidence: 0.95, populationSize: 300 }).n).toBe(34);
    expect([1.1, 0.8, 1.5].map((spread) => sampleSize({ spread, margin: 0.5, confidence: 0.95 }).n)).toEqual([22, 13, 38]);
  });

  it('gives the counts for ±10 % at three spreads and four confidences, also for 400 vines', () => {
    // Computed by script from the t and finite-population formulas, independent of this code
    const table = [
      [0.25, [19, 27, 38, 46], [19, 25, 35, 42]],
      [0.3, [27, 38, 52, 64], [25, 35, 47, 56]],
      [0.4, [46, 64, 90, 110], [41, 56, 74, 87]],
    ] as const;
    for (const [spread, large, of400] of table) {
      [0.9, 0.95, 0.98, 0.99].forEach((confidence, i) => {
        expect(sampleSize({ spread, margin: 0.1, confidence }).n).toBe(large[i]);
        expect(sampleSize({ spread, margin: 0.1, confidence, populationSize: 400 }).n).toBe(of400[i]);
      });
    }
  });

  it('gives the bags for an absolute margin in °Brix', () => {
    // Computed by script from the t formula, independent of this code
    const counts = (margin: number) => [0.9, 0.95, 0.98, 0.99].map((confidence) => sampleSize({ spread: 0.8, margin, confidence }).n);
    expect(counts(0.5)).toEqual([9, 13, 18, 21]);
    expect(counts(0.3)).toEqual([22, 30, 42, 51]);
  });

  it('turns the trade-default spreads into these counts at 95 %', () => {
    // R 4.2.2 by search
    const cases = [[1.1, 0.5, 22], [1.1, 1, 8], [0.1, 0.05, 18], [0.9, 0.5, 15], [0.12, 0.1, 9], [0.35, 0.1, 50], [0.35, 0.15, 24], [0.25, 0.1, 27], [0.4, 0.1, 64]] as const;
    for (const [spread, margin, n] of cases) expect(sampleSize({ spread, margin, confidence: 0.95 }).n).toBe(n);
  });

  it('is minimal: one fewer would miss the margin, and the half-width is the inverse of the count', () => {
    for (const spread of [0.1, 0.6, 1.3, 4.7])
      for (const confidence of [0.9, 0.99])
        for (const populationSize of [60, 400, Infinity]) {
          const steps = sampleSizeSteps({ spread, margin: 0.5, confidence, populationSize });
          expect(steps.halfWidth).toBeLessThanOrEqual(0.5 * (1 + 1e-12));
          if (steps.n > 2) expect(steps.halfWidthOneFewer).toBeGreaterThan(0.5);
          const back = sampleSize({ spread, margin: halfWidth({ spread, n: steps.n, confidence, populationSize }) || 0.5, confidence, populationSize });
          expect(back.n).toBe(steps.n);
        }
  });

  it('keeps the floor of two readings, the floor of the planner, and the ceiling of the zone', () => {
    expect(sampleSize({ spread: 0, margin: 1, confidence: 0.95 })).toMatchObject({ n: 2, halfWidth: 0, limitedBy: 'margin' });
    expect(sampleSize({ spread: 0.1, margin: 5, confidence: 0.95, minimum: 5 })).toMatchObject({ n: 5, limitedBy: 'minimum' });
    expect(sampleSize({ spread: 50, margin: 0.5, confidence: 0.95, populationSize: 40 })).toMatchObject({ n: 40, halfWidth: 0, limitedBy: 'population' });
    expect(sampleSize({ spread: 1, margin: 0.5, confidence: 0.95, populationSize: 1 })).toMatchObject({ n: 1, limitedBy: 'population' });
  });

  it('refuses a margin of 0, a negative spread, a confidence of 95 and an empty zone with a sentence', () => {
    expect(() => sampleSize({ spread: 1, margin: 0, confidence: 0.95 })).toThrow('margin must be above 0');
    expect(() => sampleSize({ spread: -1, margin: 1, confidence: 0.95 })).toThrow('spread must be 0 or more');
    expect(() => sampleSize({ spread: 1, margin: 1, confidence: 95 })).toThrow('between 0 and 1');
    expect(() => sampleSize({ spread: 1, margin: 1, confidence: 0.95, populationSize: 0 })).toThrow('at least 1 vine');
    expect(() => sampleSize({ spread: Number.NaN, margin: 1, confidence: 0.95 })).toThrow('spread');
  });
});

describe('two-stage rule after a pilot', () => {
  it('keeps t at the pilot and never asks for fewer than the pilot', () => {
    // Stein 1945, computed with R 4.2.2
    const first = steinSampleSize({ pilotN: 10, pilotSpread: 1.2, margin: 0.5, confidence: 0.95 });
    expectRelative(first.unrounded, 29.475965, 1e-7);
    expect(first).toMatchObject({ total: 30, more: 20 });
    const second = steinSampleSize({ pilotN: 15, pilotSpread: 0.5, margin: 0.5, confidence: 0.95 });
    expect(second.unrounded).toBeCloseTo(4.6, 3);
    expect(second).toMatchObject({ total: 15, more: 0 });
  });
});

describe('sample size to notice a difference', () => {
  const oneSd = { spread: 1, difference: 1, alpha: 0.05, sides: 1 } as const;

  it('follows the handbook style of iteration without cycling', () => {
    // NIST/SEMATECH e-Handbook 7.2.2.2 (from memory), recomputed with R 4.2.2
    const tenPercent = { ...oneSd, power: 0.9 };
    expectRelative(detectionSizeNormal(tenPercent), 8.5638, 1e-4);
    expectRelative(detectionSizeAtDf(tenPercent, 8), 10.6039, 1e-5);
    expectRelative(detectionSizeAtDf(tenPercent, 10), 10.142, 1e-5);
    expect(detectionSize(tenPercent)).toBe(11);
    const fivePercent = { ...oneSd, power: 0.95 };
    expectRelative(detectionSizeNormal(fivePercent), 10.82217, 1e-6);
    expectRelative(detectionSizeAtDf(fivePercent, 10), 13.14006, 1e-6);
    expectRelative(detectionSizeAtDf(fivePercent, 13), 12.54482, 1e-6);
    expectRelative(detectionSizeAtDf(fivePercent, 12), 12.7062, 1e-6);
    expect(detectionSize(fivePercent)).toBe(13);
  });

  it('agrees with the exact power of a t test', () => {
    // Inputs of Brus, Spatial Sampling with R, ch. 12; R 4.2.2 power.t.test gives n = 100.287681782467
    const brus = { spread: 4, difference: 1, alpha: 0.05, power: 0.8, sides: 1 } as const;
    expectRelative(detectionSizeNormal(brus), 98.9209, 1e-6);
    expect(Math.ceil(detectionSizeNormal(brus))).toBe(99);
    expect(detectionPower(brus, 100.287681782467)).toBeCloseTo(0.8, 6); // power.t.test solves to about this
    expect(detectionSizeExact(brus)).toBe(101);
  });
});

describe('spread and margin on one scale', () => {
  it('converts only when one is relative and the other is not', () => {
    expect(matchMargin({ kind: 'sd', value: 1.1 }, { kind: 'absolute', value: 0.5 }, null)).toEqual({ spread: 1.1, margin: 0.5 });
    expect(matchMargin({ kind: 'cv', value: 0.4 }, { kind: 'relative', value: 0.1 }, null)).toEqual({ spread: 0.4, margin: 0.1 });
    expect(matchMargin({ kind: 'cv', value: 0.4 }, { kind: 'absolute', value: 5 }, 120)).toEqual({ spread: 48, margin: 5 });
    expect(matchMargin({ kind: 'sd', value: 2 }, { kind: 'relative', value: 0.1 }, 20)).toEqual({ spread: 2, margin: 2 });
  });

  it('asks for a mean where the conversion needs one', () => {
    expect(() => matchMargin({ kind: 'cv', value: 0.4 }, { kind: 'absolute', value: 5 }, null)).toThrow('expected mean');
    expect(() => matchMargin({ kind: 'sd', value: 2 }, { kind: 'relative', value: 0.1 }, 0)).toThrow('expected mean');
  });
});
