import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { backTestSteps, judgeBackTest } from '../../shared/ripening/backTest.ts';
import { findBend } from '../../shared/ripening/bend.ts';
import { dayDegrees, degreeDays, heatRegion, heatSeason, monthlyDegreeDays } from '../../shared/ripening/degreeDays.ts';
import { forecastDay, forecastTarget } from '../../shared/ripening/forecast.ts';
import { loadingChange, sugarPerBerryMg } from '../../shared/ripening/sugarPerBerry.ts';
import { tellDaysApart } from '../../shared/ripening/tellDaysApart.ts';
import { fitTrend, type Trend, type TrendOptions, type VisitPoint } from '../../shared/ripening/trend.ts';
import { visitFlags } from '../../shared/ripening/visitFlags.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

const DAYS = [0, 7, 14, 21, 26];
const visits = (values: readonly number[], days: readonly number[] = DAYS): VisitPoint[] => values.map((value, i) => ({ day: days[i]!, value }));
const BRIX = visits([18.2, 19.6, 21.1, 22.3, 23.5]);
const AT_95: TrendOptions = { confidence: 0.95 };

function trendOf(points: readonly VisitPoint[], options = AT_95): Trend {
  const trend = fitTrend(points, options);
  if (trend.kind !== 'trend') throw new Error(trend.reason);
  return trend;
}

describe('trend', () => {
  it('gives the line of R for five visits', () => {
    // R 4.2.2: lm(brix ~ day), confint
    const trend = trendOf(BRIX);
    expectRelative(trend.intercept, 18.203202, 1e-7);
    expectRelative(trend.slope, 0.201235133, 1e-8);
    expectRelative(trend.slopeStandardError, 0.004565025, 1e-6);
    expectRelative(trend.slopeLower, 0.186707, 2e-6);
    expectRelative(trend.slopeUpper, 0.215763, 2e-6);
    expectRelative(trend.residualSd, 0.095451608, 1e-7);
    expectRelative(trend.rSquared, 0.998458548, 1e-8);
    expect(trend).toMatchObject({ visits: 5, df: 3, word: 'higher', firstDay: 0, lastDay: 26 });
  });

  it('does not depend on the order of visits or the day count', () => {
    const shifted = trendOf([...BRIX].reverse().map((point) => ({ ...point, day: point.day + 20_000 })));
    expectRelative(shifted.slope, 0.201235133, 1e-8);
    expectRelative(forecastDay(shifted, 20_030).value, 24.240256, 1e-7);
  });

  it('uses only the last visits, because ripening flattens', () => {
    const early = [{ day: -40, value: 4 }, { day: -20, value: 11 }, ...BRIX];
    expectRelative(trendOf(early).slope, 0.201235133, 1e-8);
    expect(trendOf(early, { ...AT_95, lastVisits: 3 }).visits).toBe(3);
  });

  it('is refused under three visits, on fewer than three days, and across protocols', () => {
    expect(fitTrend(BRIX.slice(0, 2), AT_95)).toEqual({ kind: 'refused', reason: 'fewVisits', visits: 2, needed: 3 });
    expect(fitTrend([], AT_95)).toMatchObject({ kind: 'refused', reason: 'fewVisits', visits: 0 });
    expect(fitTrend(visits([18, 18.4, 19], [3, 3, 9]), AT_95)).toMatchObject({ kind: 'refused', reason: 'oneDay' });
    const mixed = BRIX.map((point, i) => ({ ...point, protocol: i < 3 ? 'berries' : 'clusters' }));
    expect(fitTrend(mixed, AT_95)).toMatchObject({ kind: 'refused', reason: 'mixedProtocols' });
  });

  it('calls a falling acidity lower, and a scatter neither', () => {
    expect(trendOf(visits([9.8, 8.7, 7.9, 7.0, 6.4])).word).toBe('lower');
    expect(trendOf(visits([22.1, 22.9, 22.0, 22.8, 22.2])).word).toBe('notDistinguishable');
  });

  it('does not take three rounded values on one line for certainty', () => {
    const straight = visits([20, 21, 22], [0, 7, 14]);
    expect(trendOf(straight).residualSd).toBe(0);
    expectRelative(trendOf(straight, { ...AT_95, resolution: 0.2 }).residualSd, 0.2 / Math.sqrt(12), 1e-12);
  });
});

describe('forecast', () => {
  const trend = trendOf(BRIX);

  it('gives the bands of R for day 30', () => {
    // R 4.2.2: predict(lm, interval = "confidence" / "prediction")
    const day30 = forecastDay(trend, 30);
    expectRelative(day30.value, 24.240256, 1e-7);
    expectRelative(day30.line.lower, 23.965989, 1e-7);
    expectRelative(day30.line.upper, 24.514523, 1e-7);
    expectRelative(day30.visit.lower, 23.830991, 1e-7);
    expectRelative(day30.visit.upper, 24.649522, 1e-7);
    expect(day30.daysBeyondLastVisit).toBe(4);
  });

  it('gives the day of 24.5 °Brix with the limits of Fieller', () => {
    // R 4.2.2, from the quadratic of Fieller 1954
    const target = forecastTarget(trend, 24.5);
    if (target.kind !== 'range') throw new Error(target.reason);
    expectRelative(target.day, 31.290748, 1e-7);
    expectRelative(target.lower, 29.932088, 1e-7);
    expectRelative(target.upper, 32.834781, 1e-7);
    expect(target.state).toBe('ahead');
  });

  it('limits are where the bands meet the target', () => {
    for (const of of ['line', 'visit'] as const) {
      const target = forecastTarget(trend, 24.5, { of });
      if (target.kind !== 'range') throw new Error(target.reason);
      expectRelative(forecastDay(trend, target.lower)[of].upper, 24.5, 1e-10);
      expectRelative(forecastDay(trend, target.upper)[of].lower, 24.5, 1e-10);
    }
  });

  it('works for what falls', () => {
    const acidity = trendOf(visits([9.8, 8.7, 7.9, 7.0, 6.4]));
    const target = forecastTarget(acidity, 6);
    if (target.kind !== 'range') throw new Error(target.reason);
    expect(target.lower).toBeLessThan(target.day);
    expect(target.day).toBeLessThan(target.upper);
    expectRelative(forecastDay(acidity, target.upper).line.upper, 6, 1e-10);
  });

  it('gives no date while the slope cannot be told from level, or when the line leads away', () => {
    expect(forecastTarget(trendOf(visits([22.1, 22.9, 22.0, 22.8, 22.2])), 24)).toEqual({ kind: 'refused', reason: 'slopeNotClear' });
    expect(forecastTarget(trend, 15)).toEqual({ kind: 'refused', reason: 'leadsAway' });
    expect(forecastTarget(trend, 20)).toMatchObject({ kind: 'range', state: 'passed' });
  });

  it('gives no date from three visits, where a clear slope is mostly luck', () => {
    expect(forecastTarget(trendOf(BRIX.slice(0, 3)), 24)).toEqual({ kind: 'refused', reason: 'fewVisits' });
    expect(forecastDay(trendOf(BRIX.slice(0, 3)), 21).visit.upper).toBeGreaterThan(22);
  });

  it('bands hold about as often as they say on a straight truth', () => {
    const random = seededRandom(8);
    let held = 0;
    let dated = 0;
    let dates = 0;
    const seasons = 6000;
    for (let season = 0; season < seasons; season++) {
      const noisy = trendOf(DAYS.map((day) => ({ day, value: 18 + 0.2 * day + 0.3 * randomNormal(random) })));
      const next = 18 + 0.2 * 33 + 0.3 * randomNormal(random);
      const band = forecastDay(noisy, 33).visit;
      if (next >= band.lower && next <= band.upper) held += 1;
      const target = forecastTarget(noisy, 24.6);
      if (target.kind !== 'range') continue;
      dates += 1;
      if (target.lower <= 33 && target.upper >= 33) dated += 1;
    }
    // Binomial sd 0.003
    expect(held / seasons).toBeGreaterThan(0.94);
    expect(held / seasons).toBeLessThan(0.96);
    expect(dates).toBeGreaterThan(seasons * 0.98);
    expect(dated / dates).toBeGreaterThan(0.935);
    expect(dated / dates).toBeLessThan(0.965);
  });
});

describe('bend', () => {
  const flattening = visits([18.2, 19.9, 21.1, 22.0, 22.4, 23.0], [0, 7, 14, 21, 26, 34]);

  it('gives the parabola of R and calls it slowing', () => {
    // R 4.2.2: lm(brix ~ day + I(day^2))
    const bend = findBend(flattening, 0.95);
    if (bend.kind !== 'bend') throw new Error(bend.reason);
    expectRelative(bend.rateChangePerDay, 2 * -0.003153685309, 1e-9);
    expectRelative(bend.p, 2.039774076e-3, 1e-8);
    expect(bend.word).toBe('slowing');
    const falling = findBend(flattening.map(({ day, value }) => ({ day, value: 30 - value })), 0.95);
    expect(falling).toMatchObject({ word: 'slowing' });
    expect(findBend(flattening.map(({ day, value }) => ({ day: -day, value })), 0.95)).toMatchObject({ word: 'quickening' });
  });

  it('is not seen in a straight line nor sought in four visits', () => {
    expect(findBend(BRIX, 0.95)).toMatchObject({ word: 'notDistinguishable' });
    expect(findBend(BRIX.slice(0, 4), 0.95)).toEqual({ kind: 'refused', reason: 'fewVisits', visits: 4, needed: 5 });
  });
});

describe('back-test', () => {
  it('beats no change on steady ripening and does not on scatter', () => {
    const steady = judgeBackTest(backTestSteps(visits([16.8, 18.2, 19.6, 21.1, 22.3, 23.5], [-7, ...DAYS]), AT_95));
    expect(steady).toMatchObject({ n: 3, beatsNoChange: true, few: true });
    expect(steady.trendError).toBeLessThan(0.3);
    expect(steady.noChangeError).toBeGreaterThan(1);
    const scatter = judgeBackTest(backTestSteps(visits([22, 23, 21.9, 23.1, 22, 22.1, 22.9, 22], [0, 7, 14, 21, 28, 35, 42, 49]), AT_95));
    expect(scatter.n).toBe(5);
    expect(scatter.few).toBe(false);
    expect(scatter.beatsNoChange).toBe(scatter.trendError < scatter.noChangeError);
  });

  it('has nothing to say of three visits', () => {
    expect(judgeBackTest(backTestSteps(BRIX.slice(0, 3), AT_95))).toMatchObject({ n: 0, beatsNoChange: null, few: true });
  });

  it('forecasts each visit only from those before it', () => {
    const steps = backTestSteps(BRIX, AT_95);
    expect(steps.map(({ day }) => day)).toEqual([21, 26]);
    // By hand: line through 0 → 18.2, 7 → 19.6, 14 → 21.1 has slope 2.9/14 and passes (7, 19.6333)
    expectRelative(steps[0]!.forecast, 58.9 / 3 + (2.9 / 14) * 14, 1e-12);
    expect(steps[0]!.noChange).toBe(21.1);
  });
});

describe('degree days', () => {
  it('floor each day, not the sum', () => {
    // Worked by hand: 4.5 7 2 0 0 12 15; without the floor 34
    const days = [[21.5, 7.5], [24, 10], [18, 6], [12.5, 4.5], [9, 1], [30, 14], [33.5, 16.5]].map(([maxC, minC]) => ({ maxC: maxC!, minC: minC! }));
    expect(days.map((day) => dayDegrees(day))).toEqual([4.5, 7, 2, 0, 0, 12, 15]);
    expect(degreeDays(days)).toBe(40.5);
    expect(() => dayDegrees({ maxC: 5, minC: 12 })).toThrow('minimum');
  });

  it('sum months and name the region', () => {
    // Worked by hand; 2722.5 °F·d, region II of Winkler
    const lengths = [30, 31, 30, 31, 31, 30, 31];
    const months = [12.1, 14.8, 18.6, 21.0, 20.7, 18.2, 14.0].map((meanC, i) => ({ meanC, days: lengths[i]! }));
    const sum = monthlyDegreeDays(months);
    expectRelative(sum, 1512.5, 1e-12);
    expectRelative(sum * 1.8, 2722.5, 1e-12);
    expect(heatRegion(sum)).toBe('II');
    expect([0, 850, 1110.9, 1111, 1389, 1667, 1944, 2222, 2700].map(heatRegion)).toEqual(['tooCool', 'Ia', 'Ia', 'Ib', 'II', 'III', 'IV', 'V', 'tooHot']);
  });

  it('run over the other half of the year in the south', () => {
    expect(heatSeason(45).from).toEqual([4, 1]);
    expect(heatSeason(-34)).toEqual({ from: [10, 1], to: [4, 30] });
  });
});

describe('sugar per berry', () => {
  const estimate = (value: number, standardError: number) => ({ value, standardError, df: 20 });

  it('is a hundredth of the °Brix of the berry weight', () => {
    expectRelative(sugarPerBerryMg(estimate(24, 0), estimate(1.25, 0)).value, 300, 1e-12);
  });

  it('tells concentration from loading, and dilution from loss', () => {
    const start = { brix: estimate(22, 0.1), berryWeightG: estimate(1.4, 0.01) };
    const word = (brix: number, weight: number) => loadingChange(start, { brix: estimate(brix, 0.1), berryWeightG: estimate(weight, 0.01) }, 0.95).word;
    expect(word(24, 1.28)).toBe('concentration'); // 308 mg before, 307 after
    expect(word(24, 1.4)).toBe('loading');
    expect(word(20.5, 1.5)).toBe('dilution');
    expect(word(20, 1.4)).toBe('losing');
    expect(word(22.1, 1.4)).toBe('notDistinguishable');
  });
});

describe('Tuesday or Friday', () => {
  const trend = trendOf(BRIX);

  it('says whether the bags can tell the days apart, and how many could', () => {
    const few = tellDaysApart({ trend, dayA: 29, dayB: 32, bagSd: 0.8, bagsPerVisit: 5 });
    expectRelative(few.difference, 3 * 0.201235133, 1e-8);
    expect(few.answer).toBe('no');
    const n = few.bagsNeeded!;
    expect(tellDaysApart({ trend, dayA: 29, dayB: 32, bagSd: 0.8, bagsPerVisit: n }).answer).toBe('yes');
    expect(tellDaysApart({ trend, dayA: 29, dayB: 32, bagSd: 0.8, bagsPerVisit: n - 1 }).answer).toBe('no');
    expect(few.lower).toBeLessThan(few.difference);
    expect(few.days[0].day).toBe(29);
  });

  it('promises nothing when the slope is not clear, the days are one, or there are not bags enough', () => {
    const level = trendOf(visits([22.1, 22.9, 22.0, 22.8, 22.2]));
    expect(tellDaysApart({ trend: level, dayA: 29, dayB: 32, bagSd: 0.8, bagsPerVisit: 5 })).toMatchObject({ answer: 'slopeNotClear', bagsNeeded: null });
    expect(tellDaysApart({ trend, dayA: 29, dayB: 29, bagSd: 0.8, bagsPerVisit: 5 }).answer).toBe('slopeNotClear');
    expect(tellDaysApart({ trend, dayA: 29, dayB: 30, bagSd: 0.8, bagsPerVisit: 5, mostBags: 20 }).bagsNeeded).toBeNull();
  });
});

describe('flags beside a visit', () => {
  it('are raised by what was recorded, never by what was not', () => {
    expect(visitFlags({ wetFruit: true, rainMm: 12, maxC: 38 })).toEqual(['wetFruit', 'rain', 'heat']);
    expect(visitFlags({ wetFruit: null, rainMm: null, maxC: null })).toEqual([]);
    expect(visitFlags({ wetFruit: false, rainMm: 0, maxC: 0 })).toEqual([]);
  });
});
