import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { convertAcidity } from '../../shared/cellar/acidity.ts';
import { ALCOHOL_SETTINGS, potentialAlcohol } from '../../shared/cellar/alcohol.ts';
import { reviewForecasts } from '../../shared/cellar/forecastReview.ts';
import { lotLikeness } from '../../shared/cellar/lotLikeness.ts';
import { lotPh, lotTonnes, lotValue, type LotPart } from '../../shared/cellar/lots.ts';
import { airGravityToBrix, baumeToGravity, brixToGravity, gravityToBaume, gravityToBrix, gravityToOechsle, juiceDensityGPerL, oechsleToGravity, solidsGPerL, klosterneuburgToOechsle } from '../../shared/cellar/must.ts';
import { fitTank, hintFor, litreHints, litresFrom, tankVolumeNeeded } from '../../shared/cellar/tankFit.ts';
import { correctRefractometer } from '../../shared/cellar/temperature.ts';
import { convertUnit, kgPerHlToLitresPerT } from '../../shared/cellar/unitFactors.ts';
import { estimateYield, type YieldQuestion } from '../../shared/cellar/yield.ts';
import { intervalOf, type Estimate } from '../../shared/sampling/precision.ts';
import { criticalZ } from '../../shared/sampling/quantiles.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

const known = (value: number): Estimate => ({ value, standardError: 0, df: Infinity });

describe('°Brix and specific gravity', () => {
  it('follow the AOAC table fit both ways', () => {
    // Hackbarth 2011 polynomial, computed with R 4.2.2
    const forward = [[18, 1.07404], [20, 1.08287], [22, 1.09183], [23, 1.09636], [24, 1.10092], [25, 1.10551], [28, 1.11949]] as const;
    for (const [brix, gravity] of forward) expect(brixToGravity(brix)).toBeCloseTo(gravity, 5);
    const backward = [[1.08, 19.3523], [1.09, 21.5938], [1.1, 23.7996], [1.11, 25.9709]] as const;
    for (const [gravity, brix] of backward) expect(gravityToBrix(gravity)).toBeCloseTo(brix, 4);
    for (const brix of [0, 0.3, 11, 24.7, 39.9]) expect(gravityToBrix(brixToGravity(brix))).toBeCloseTo(brix, 9);
  });

  it('follow the NBS table fit for gravity weighed in air', () => {
    // R 4.2.2; the cubic returns −0.0048 for water
    const cubic = [[1.04, 9.9934], [1.08, 19.3311], [1.09, 21.5705], [1.1, 23.7741], [1.12, 28.0784]] as const;
    for (const [gravity, brix] of cubic) expect(airGravityToBrix(gravity)).toBeCloseTo(brix, 4);
    expect(airGravityToBrix(1)).toBe(0);
  });

  it('give Baumé and Oechsle', () => {
    expect(gravityToBaume(1.09)).toBeCloseTo(11.972, 3); // 145(1 − 1/S), from memory of the trade formula
    expect(gravityToBaume(1.1)).toBeCloseTo(13.182, 3);
    expect(baumeToGravity(gravityToBaume(1.095))).toBeCloseTo(1.095, 12);
    expect(gravityToOechsle(1.09)).toBeCloseTo(90, 9);
    expect(oechsleToGravity(90)).toBeCloseTo(1.09, 12);
  });

  it('give the density and all solids of a juice', () => {
    expectRelative(juiceDensityGPerL(24), 998.203 * 1.10092, 1e-5);
    expect(solidsGPerL(24)).toBeCloseTo(263.75, 2); // R 4.2.2
  });

  it('refuse what no juice can be', () => {
    expect(() => brixToGravity(-1)).toThrow('between 0 and 60');
    expect(() => brixToGravity(Number.NaN)).toThrow('between 0 and 60');
    expect(() => gravityToBrix(0.9)).toThrow('between 1 and');
  });
});

describe('potential alcohol', () => {
  const sugar = (value: number) => ({ lower: value, value, upper: value });

  it('is a range that names its method', () => {
    // 24 and 22 °Brix by factor 0.55, 0.59, 0.62; published range 0.55–0.64 (winebusiness.com, fermcalc.com)
    const at24 = potentialAlcohol(sugar(24), 'brixFactor');
    expect(at24.method).toBe('brixFactor');
    expectRelative(at24.low, 13.2, 1e-12);
    expectRelative(at24.middle, 14.16, 1e-12);
    expectRelative(at24.high, 14.88, 1e-12);
    const at22 = potentialAlcohol(sugar(22), 'brixFactor');
    expectRelative(at22.low, 12.1, 1e-12);
    expectRelative(at22.high, 13.64, 1e-12);
  });

  it('takes any factor of the published range', () => {
    // 24 and 22 °Brix by 0.55, 0.57, 0.59, 0.60, 0.62: worked by hand
    const by = (brix: number, factor: number) => potentialAlcohol(sugar(brix), 'brixFactor', { ...ALCOHOL_SETTINGS, perBrix: { low: factor, middle: factor, high: factor } }).middle;
    const factors = [0.55, 0.57, 0.59, 0.6, 0.62];
    [13.2, 13.68, 14.16, 14.4, 14.88].forEach((percent, at) => expectRelative(by(24, factors[at]!), percent, 1e-12));
    [12.1, 12.54, 12.98, 13.2, 13.64].forEach((percent, at) => expectRelative(by(22, factors[at]!), percent, 1e-12));
    // 240 g/L over 17 g/L for 1 %: worked by hand
    const at17 = { ...ALCOHOL_SETTINGS, sugarPerPercent: { low: 17, middle: 17, high: 17 } };
    expect(potentialAlcohol(sugar(240), 'measuredSugar', at17).middle).toBeCloseTo(14.1176, 4);
  });

  it('spans the range of a published table', () => {
    // Table of a technical column (scribd.com/document/456689396): 180 to 210 g/L, at 18.0 to 16.5 g/L for 1 %
    const printed = [[180, 10.0, 10.9], [190, 10.6, 11.5], [200, 11.1, 12.1], [210, 11.7, 12.7]] as const;
    for (const [gramsPerL, low, high] of printed) {
      const range = potentialAlcohol(sugar(gramsPerL), 'measuredSugar');
      expect(Math.abs(range.low - low)).toBeLessThanOrEqual(0.06);
      expect(Math.abs(range.high - high)).toBeLessThanOrEqual(0.06);
    }
  });

  it('divides measured sugar by 16.83', () => {
    // EU convention as quoted by secondary pages
    const measured = potentialAlcohol(sugar(240), 'measuredSugar');
    expect(measured.middle).toBeCloseTo(14.2602, 4);
    expect(measured.high).toBeCloseTo(14.5455, 4); // 16.5 g/L
    expect(measured.low).toBeCloseTo(240 / 18, 9);
  });

  it('takes 30 g/L of other solids off when only °Brix is known', () => {
    expect(potentialAlcohol(sugar(24), 'solidsLessAllowance').middle).toBeCloseTo(13.89, 2); // R 4.2.2
  });

  it('takes sugar from the OIV table of must when only °Brix is known', () => {
    // Table II of OIV-MA-AS2-02: 20 % by mass as sucrose is 191.9 g/L, 24 % is 237.8 g/L; halves of a step by hand.
    expect(potentialAlcohol(sugar(24), 'sugarTable').middle).toBeCloseTo(237.8 / 16.83, 9);
    expect(potentialAlcohol(sugar(24.5), 'sugarTable').high).toBeCloseTo((237.8 + 249.5) / 2 / 16.5, 9);
    expect(potentialAlcohol(sugar(20), 'sugarTable').low).toBeCloseTo(191.9 / 18, 9);
    for (const brix of [9, 10, 17.3, 30, 31]) expect(potentialAlcohol(sugar(brix), 'sugarTable').middle).toBeGreaterThan(potentialAlcohol(sugar(brix - 0.1), 'sugarTable').middle);
  });

  it("carries the sugar's own interval", () => {
    const wide = potentialAlcohol({ lower: 23, value: 24, upper: 25 }, 'brixFactor');
    expectRelative(wide.low, 23 * 0.55, 1e-12);
    expectRelative(wide.high, 25 * 0.62, 1e-12);
    expect(() => potentialAlcohol({ lower: 25, value: 24, upper: 26 }, 'brixFactor')).toThrow('within its limits');
  });
});

describe('expected tonnes', () => {
  it('multiply up with the error of their parts', () => {
    // R 4.2.2
    const answer = estimateYield({ places: 2000, missingShare: 0.04, clustersPerVine: 32, clusterWeightG: 115, relativeErrors: { clusters: 0.03, clusterWeight: 0.06, vines: 0.01 }, confidence: 0.95 });
    expectRelative(answer.livingVines, 1920, 1e-12);
    expectRelative(answer.kgPerVine, 3.68, 1e-12);
    expectRelative(answer.tonnes, 7.0656, 1e-12);
    expectRelative(answer.relativeError, 0.067823, 1e-5);
    expectRelative(answer.relativeErrorExact, 0.06785, 1e-5);
    expectRelative(answer.standardErrorT, 0.479212, 1e-5);
    expectRelative(answer.lowerT, 6.126361, 1e-6);
    expectRelative(answer.upperT, 8.004839, 1e-6);
  });

  it('name the growth factor as what dominates at lag phase', () => {
    // Worked by hand: 3840 · 28 · 62 · 2 · 0.97 / 10⁶ = 12.93 t; √(2² + 6² + 5² + 10²) = 12.8 %; about ±3.3 t
    const lag: YieldQuestion = { places: 4000, missingShare: 0.04, clustersPerVine: 28, clusterWeightG: 62, growthFactor: 2, lossShare: 0.03, relativeErrors: { vines: 0.02, clusters: 0.06, clusterWeight: 0.05, growth: 0.1 }, confidence: 0.95 };
    const answer = estimateYield(lag);
    expect(answer.tonnes).toBeCloseTo(12.93, 2);
    expect(answer.relativeError).toBeCloseTo(0.128, 3);
    expect(answer.halfWidthT).toBeCloseTo(3.3, 1);
    expect(answer.dominating).toBe('growth');
    expectRelative(answer.parts[0]!.share, 100 / 165, 1e-12);
    expectRelative(answer.parts.reduce((sum, { share }) => sum + share, 0), 1, 1e-12);
    const assumed = estimateYield({ ...lag, growthIsAssumed: true });
    expect(assumed.widenedForGrowth).toBe(true);
    expectRelative(assumed.halfWidthT, 0.3 * assumed.tonnes, 1e-12);
  });

  it('shrink the error when many clusters go with light ones', () => {
    const base: YieldQuestion = { places: 100, missingShare: 0, clustersPerVine: 30, clusterWeightG: 100, relativeErrors: { clusters: 0.1, clusterWeight: 0.1 }, confidence: 0.95 };
    expectRelative(estimateYield({ ...base, clusterCorrelation: -0.5 }).relativeError, 0.1, 1e-12);
    expectRelative(estimateYield({ ...base, clusterCorrelation: -1 }).relativeError + 1, 1, 1e-9);
  });

  it('refuse shares that are no shares', () => {
    const base: YieldQuestion = { places: 100, missingShare: 4, clustersPerVine: 30, clusterWeightG: 100, relativeErrors: {}, confidence: 0.95 };
    expect(() => estimateYield(base)).toThrow('shares between 0 and 1');
    expect(() => estimateYield({ ...base, missingShare: 0, clusterWeightG: Number.NaN })).toThrow('0 or more');
    expect(estimateYield({ ...base, missingShare: 0 }).dominating).toBeNull();
  });
});

describe('litres and tanks', () => {
  it('need room above the must', () => {
    // Worked by hand: 6.2 t at 0.90 L/kg
    const must = litresFrom(known(6.2), known(900));
    expectRelative(must.value, 5580, 1e-12);
    expectRelative(tankVolumeNeeded(must.value, 0.2), 6975, 1e-12);
    expectRelative(tankVolumeNeeded(must.value, 0.25), 7440, 1e-12);
  });

  it('give a chance, not a yes or no', () => {
    // Computed by script from the normal distribution: 12.4 t ± 1.5 (95 %), 800 L/t, 12 000 L at 80 %
    const tonnes: Estimate = { value: 12.4, standardError: 1.5 / criticalZ(0.95), df: Infinity };
    const must = litresFrom(tonnes, known(800));
    const interval = intervalOf(must, 0.95);
    expectRelative(must.value, 9920, 1e-12);
    expectRelative(interval.halfWidth, 1200, 1e-12);
    const fit = fitTank(must, { volumeL: 12_000, fillShare: 0.8, minimumL: 9000 });
    expectRelative(fit.workingL, 9600, 1e-12);
    expect(fit.chanceOfFit).toBeCloseTo(0.3, 2);
    expectRelative(fit.overL, 320, 1e-9);
    expect(fit.chanceBelowMinimum).toBeCloseTo(0.0664, 3); // R 4.2.2: pnorm((9000 - 9920) / (1200 / qnorm(.975)))
  });

  it('widen when the litres a tonne are not exactly known', () => {
    const must = litresFrom({ value: 10, standardError: 0.3, df: Infinity }, { value: 800, standardError: 32, df: Infinity });
    expectRelative(must.standardError / must.value, 0.05, 1e-12); // 3 % and 4 %
  });

  it('decide plainly when nothing is uncertain', () => {
    expect(fitTank(known(9600), { volumeL: 12_000, fillShare: 0.8 }).chanceOfFit).toBe(1);
    expect(fitTank(known(9601), { volumeL: 12_000, fillShare: 0.8 }).chanceOfFit).toBe(0);
    expect(() => fitTank(known(1), { volumeL: 0, fillShare: 0.8 })).toThrow('volume above 0');
    expect(() => tankVolumeNeeded(100, 1)).toThrow('Headspace');
  });

  it('start from hints that keep must and wine apart', () => {
    expect(litreHints.map(({ id }) => id)).toEqual(['redMust', 'whiteJuice', 'redWine', 'whiteWine']);
    // Wine is what is left of the must, at either end of the custom.
    for (const wine of ['red', 'white', 'rose']) {
      expect(hintFor(wine, 'wine').lowLPerT).toBeLessThan(hintFor(wine, 'must').lowLPerT);
      expect(hintFor(wine, 'wine').highLPerT).toBeLessThan(hintFor(wine, 'must').highLPerT);
    }
    expect(litreHints.every(({ lowLPerT, highLPerT }) => lowLPerT < highLPerT)).toBe(true);
  });
});

describe('acidity', () => {
  it('goes between tartaric, sulphuric and milliequivalents', () => {
    // From the molar masses, computed with R 4.2.2
    expectRelative(convertAcidity(4.5, 'sulphuricGPerL', 'tartaricGPerL'), 6.886199, 1e-6);
    expectRelative(convertAcidity(1, 'sulphuricGPerL', 'tartaricGPerL'), 1.530266, 1e-6);
    expectRelative(convertAcidity(80, 'meqPerL', 'tartaricGPerL'), 6.00348, 1e-6);
    expectRelative(convertAcidity(6, 'tartaricGPerL', 'sulphuricGPerL'), 3.920886, 1e-6);
    expectRelative(convertAcidity(6, 'tartaricGPerL', 'meqPerL'), 79.953627, 1e-7);
    expectRelative(convertAcidity(10, 'mmolPerL', 'tartaricGPerL'), 1.50087, 1e-12);
  });
});

describe('degrees of Klosterneuburg', () => {
  // The steps of Austrian wine law, which names both degrees; from memory.
  it.each([[17, 84], [19, 94], [21, 105], [25, 127], [30, 156]])('%d are %d °Oechsle', (kmw, oechsle) => {
    expect(Math.abs(klosterneuburgToOechsle(kmw) - oechsle)).toBeLessThan(1);
  });
});

describe('refractometer temperature', () => {
  it('is never corrected twice and never guessed', () => {
    expect(correctRefractometer({ brix: 22, temperatureC: 28, compensates: true })).toEqual({ kind: 'asRead', brix: 22 });
    expect(correctRefractometer({ brix: 22, temperatureC: 28, compensates: null })).toEqual({ kind: 'ask' });
    expect(correctRefractometer({ brix: 22, temperatureC: 20, compensates: null })).toEqual({ kind: 'asRead', brix: 22 });
  });

  // Rows of table I of OIV-MA-AS2-02 between those that the program holds.
  it.each([[6, 10, 0.8], [7, 20, 0.82], [8, 25, 0.79], [9, 15, 0.67], [12, 20, 0.53], [13, 30, 0.5], [14, 25, 0.42], [16, 20, 0.28], [17, 10, 0.2], [17, 30, 0.22]])('takes off at %d °C and %d °Brix what the table does', (temperatureC, brix, taken) => {
    const answer = correctRefractometer({ brix, temperatureC, compensates: false });
    if (answer.kind !== 'corrected') throw new Error(answer.kind);
    expect(brix - taken).toBeGreaterThanOrEqual(answer.low);
    expect(brix - taken).toBeLessThanOrEqual(answer.high);
  });

  it('raises a warm reading and lowers a cold one, as a range', () => {
    const warm = correctRefractometer({ brix: 22, temperatureC: 25, compensates: false });
    if (warm.kind !== 'corrected') throw new Error(warm.kind);
    expect([warm.low, warm.middle, warm.high].map((value) => Number(value.toFixed(3)))).toEqual([22.35, 22.38, 22.41]);
    const cold = correctRefractometer({ brix: 22, temperatureC: 10, compensates: false });
    if (cold.kind !== 'corrected') throw new Error(cold.kind);
    // 0.65 at 20 °Brix and 0.67 at 25, by that method's table I.
    expect([cold.low, cold.middle, cold.high].map((value) => Number(value.toFixed(3)))).toEqual([21.312, 21.342, 21.372]);
  });
});

describe('a warm refractometer reading', () => {
  // GOST table A.1 of corrections to a laboratory refractometer, which is the International table of 1936: an older one, so within the range and no closer.
  it.each([[21, 10, 0.07], [21, 15, 0.07], [21, 20, 0.07], [21, 25, 0.08], [21, 30, 0.08], [22, 10, 0.14], [22, 15, 0.14], [22, 20, 0.15], [22, 25, 0.15]])('gains at %d °C and %d °Brix what an independent table adds', (temperatureC, brix, added) => {
    const answer = correctRefractometer({ brix, temperatureC, compensates: false });
    if (answer.kind !== 'corrected') throw new Error(answer.kind);
    expect(brix + added).toBeGreaterThanOrEqual(answer.low);
    expect(brix + added).toBeLessThanOrEqual(answer.high);
  });

  it('joins the rows of cold ones without a step', () => {
    const at = (temperatureC: number) => correctRefractometer({ brix: 22, temperatureC, compensates: false });
    const [below, above] = [at(19), at(21)];
    if (below.kind !== 'corrected' || above.kind !== 'corrected') throw new Error('not corrected');
    expect(above.middle - 22).toBeCloseTo(22 - below.middle, 1);
  });

  it.each([4.9, 25.1, 31])('is not corrected at %d °C, where no published row was at hand', (temperatureC) => {
    expect(correctRefractometer({ brix: 22, temperatureC, compensates: false })).toEqual({ kind: 'beyond', fromC: 5, toC: 25 });
    expect(correctRefractometer({ brix: 22, temperatureC, compensates: true })).toEqual({ kind: 'asRead', brix: 22 });
  });
});

describe('lots', () => {
  const part = (zone: string, tonnes: number | null, value: number, errors: { tonnes?: number; value?: number } = {}): LotPart => ({
    zone,
    areaHa: 1,
    tonnes: tonnes === null ? null : { value: tonnes, standardError: errors.tonnes ?? 0, df: Infinity },
    value: { value, standardError: errors.value ?? 0, df: Infinity },
  });

  it('are weighted by tonnes', () => {
    // Worked by hand
    const lot = lotValue([part('a', 3.2, 24.1), part('b', 1.8, 22.6), part('c', 2.5, 23.3)]);
    expectRelative(lot.value, 23.473333, 1e-7);
    expectRelative(lot.plainMean, 23.333333, 1e-7);
    expect(lot.weighting).toBe('tonnes');
  });

  it('carry the errors of values and of tonnes', () => {
    // First order by hand: values √(0.5²·0.2²·2), tonnes (2 · 0.5/10)²·2 with means 2 from the lot
    const values = lotValue([part('a', 5, 22, { value: 0.2 }), part('b', 5, 26, { value: 0.2 })]);
    expectRelative(values.standardError, Math.sqrt(0.02), 1e-12);
    const masses = lotValue([part('a', 5, 22, { tonnes: 0.5 }), part('b', 5, 26, { tonnes: 0.5 })]);
    expectRelative(masses.standardError, Math.sqrt(0.02), 1e-12);
    expect(lotValue([part('a', 5, 24, { tonnes: 3 }), part('b', 5, 24, { tonnes: 3 })]).standardError).toBe(0);
  });

  it('agree with a simulation of uncertain tonnes and values', () => {
    // Independent normal errors; the sd of 20 000 draws is itself known to half a per cent
    const parts = [part('a', 3.2, 24.1, { tonnes: 0.3, value: 0.2 }), part('b', 1.8, 22.6, { tonnes: 0.2, value: 0.3 }), part('c', 2.5, 23.3, { tonnes: 0.25, value: 0.25 })];
    const random = seededRandom(3);
    const draws = Array.from({ length: 20_000 }, () => {
      const drawn = parts.map((p) => ({ t: p.tonnes!.value + p.tonnes!.standardError * randomNormal(random), v: p.value.value + p.value.standardError * randomNormal(random) }));
      return drawn.reduce((sum, { t, v }) => sum + t * v, 0) / drawn.reduce((sum, { t }) => sum + t, 0);
    });
    const mean = draws.reduce((sum, value) => sum + value, 0) / draws.length;
    const sd = Math.sqrt(draws.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (draws.length - 1));
    expectRelative(lotValue(parts).standardError, sd, 0.02);
  });

  it('fall back to area for all zones when one has no tonnes, and say so', () => {
    const lot = lotValue([{ ...part('a', 9, 24), areaHa: 3 }, { ...part('b', null, 20), areaHa: 1 }]);
    expect(lot).toMatchObject({ weighting: 'area', value: 23 });
    expect(lotTonnes([part('a', 9, 24), part('b', null, 20)])).toBeNull();
    expectRelative(lotTonnes([part('a', 9, 24, { tonnes: 0.3 }), part('b', 3, 20, { tonnes: 0.4 })])!.standardError, 0.5, 1e-12);
    expect(() => lotValue([])).toThrow('at least one zone');
  });

  it('give pH two ways and call it approximate', () => {
    // Worked by hand
    const ph = lotPh([part('a', 1, 3.3), part('b', 1, 3.6)]);
    expectRelative(ph.value, 3.45, 1e-12);
    expectRelative(ph.viaHydrogen, 3.424595, 1e-6);
    expect(ph.approximate).toBe(true);
  });
});

describe('how alike a lot is', () => {
  const zone = (name: string, mean: number, se: number, sd: number, weight = 1) => ({ zone: name, weight, mean: { value: mean, standardError: se, df: 9 }, sd });

  it('compares the spread between zones with that inside them', () => {
    // By hand: means 22 and 26 equal weights → between 4; within 1
    const lot = lotLikeness([zone('a', 22, 0, 1), zone('b', 26, 0, 1)]);
    expect(lot).toMatchObject({ betweenVariance: 4, withinVariance: 1, betweenShare: 0.8 });
    expectRelative(lot.totalSd, Math.sqrt(5), 1e-12);
  });

  it('does not take the error of zone means for a difference', () => {
    // By hand: seen 0.25, expected from error 2 · ¼ · 0.36 · … = ½ · 0.36
    expectRelative(lotLikeness([zone('a', 22, 0.6, 1), zone('b', 23, 0.6, 1)]).betweenVariance, 0.25 - 0.18, 1e-12);
    expect(lotLikeness([zone('a', 22, 0.9, 1), zone('b', 23, 0.9, 1)]).betweenVariance).toBe(0);
  });

  it('shows what each zone does to the lot', () => {
    const lot = lotLikeness([zone('a', 23, 0, 1), zone('b', 23, 0, 1), zone('odd', 20, 0, 1)]);
    const withoutOdd = lot.without.find(({ zone: name }) => name === 'odd')!;
    expect(withoutOdd).toMatchObject({ mean: 23, betweenShare: 0 });
    expect(withoutOdd.totalSd).toBeLessThan(lot.totalSd);
    expect(lotLikeness([zone('a', 23, 0, 1)]).without).toEqual([]);
  });
});

describe('units', () => {
  it('turn trade figures into metric ones', () => {
    // By definition of the units; litres per tonne rounded as printed by Cornell and the French trade press
    expect(convertUnit(1, 'shortTonPerAcre', 'tPerHa')).toBeCloseTo(2.2417, 4);
    const perTonne = [[120, 500.724], [150, 625.905], [160, 667.632], [165, 688.496], [180, 751.086]] as const;
    for (const [gallons, litres] of perTonne) expect(convertUnit(gallons, 'usGalPerShortTon', 'LPerT')).toBeCloseTo(litres, 2);
    expect(kgPerHlToLitresPerT(130)).toBeCloseTo(769, 0);
    expect(kgPerHlToLitresPerT(160)).toBe(625);
    expect(convertUnit(1000, 'kg', 't')).toBe(1);
    expect(convertUnit(convertUnit(7.3, 'acre', 'ha'), 'ha', 'acre')).toBeCloseTo(7.3, 12);
    expect(() => convertUnit(1, 'kg', 'L')).toThrow('different things');
  });
});

describe('review of forecasts', () => {
  it('gives bias, error and how often the interval held, and says when there are few', () => {
    // By hand
    const review = reviewForecasts([
      { forecast: 10, lower: 8, upper: 12, actual: 11 },
      { forecast: 10, lower: 9, upper: 11, actual: 8 },
    ]);
    expect(review).toMatchObject({ n: 2, bias: -0.5, meanAbsoluteError: 1.5, held: 1, few: true });
    expectRelative(review.meanRelativeError, (1 / 11 + 2 / 8) / 2, 1e-12);
    expect(reviewForecasts([]).bias).toBeNaN();
  });
});
