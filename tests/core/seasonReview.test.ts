import { describe, expect, it } from 'vitest';
import { letterParts, type SeasonLetter } from '../../server/exporters/report/seasonLetter.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { errorParts } from '../../shared/cellar/errorParts.ts';
import { learnFactor, nextLot } from '../../shared/cellar/learnFactor.ts';
import { weighedYield } from '../../shared/cellar/weighedYield.ts';
import { zonesCompared, zoneVerdict } from '../../shared/cellar/zonesMattered.ts';
import { falseAlarms, forecastCoverage } from '../bench/ripening.ts';

describe('where the error of a forecast came from', () => {
  it('adds up to the whole error, whatever was measured again', () => {
    const parts = errorParts({ forecastT: 10, actualT: 12, ratios: { clusters: 1.08 } });
    // Log-mean of 12 and 10 is 2/ln 1.2 = 10.96963; times ln 1.08 = 0.0769610 is 0.84423.
    expect(parts.find(({ part }) => part === 'clusters')!.tonnes).toBeCloseTo(0.84423, 4);
    expect(parts.reduce((sum, { tonnes }) => sum + tonnes, 0)).toBeCloseTo(2, 10);
    const all = errorParts({ forecastT: 12.93, actualT: 12.93 * 0.9 * 1.2 * 0.97, ratios: { clusters: 0.9, growth: 1.2, losses: 0.97 } });
    expect(all.find(({ part }) => part === 'rest')!.tonnes).toBeCloseTo(0, 9);
    expect(all[0]!.part).toBe('growth');
  });

  it('says nothing of a forecast or a weight of nothing', () => {
    expect(errorParts({ forecastT: 0, actualT: 3, ratios: {} })).toEqual([]);
    expect(errorParts({ forecastT: 5, actualT: 5, ratios: { clusters: 1.1 } }).reduce((sum, { tonnes }) => sum + tonnes, 0)).toBeCloseTo(0, 12);
  });
});

describe('a factor learned from own lots', () => {
  it('carries number and spread, and is too few below three', () => {
    // R: t.test(c(1.8, 2.0, 2.2)) gives 1.503172 to 2.496828.
    const factor = learnFactor([1.8, 2.0, 2.2], 0.95)!;
    expect(factor).toMatchObject({ n: 3, few: false });
    expect(factor.mean).toBeCloseTo(2, 12);
    expect(factor.low).toBeCloseTo(1.503172, 5);
    expect(factor.high).toBeCloseTo(2.496828, 5);
    expect(nextLot(factor).standardError).toBeCloseTo(0.2309401, 6);
    expect(learnFactor([1.8, 2.2], 0.95)!.few).toBe(true);
    expect(learnFactor([1.8], 0.95)!.low).toBeNaN();
    expect(learnFactor([], 0.95)).toBeNull();
  });
});

describe('whether zones mattered', () => {
  const mean = (zone: number, value: number, n = 12, sd = 1) => ({ zone, n, sd, estimate: { value, standardError: sd / Math.sqrt(n), df: n - 1 } });

  it('asks more strictly, the more is looked at', () => {
    // Two groups of 12 with sd 1, 1.1 apart: F = 7.26; R: pf(7.26, 1, 22, lower.tail = FALSE) = 0.01324.
    const close = zonesCompared([mean(1, 22), mean(2, 23.1)], { confidence: 0.95, asked: 1 });
    expect(close.p).toBeCloseTo(0.01324279, 6);
    expect(close.differ).toBe(true);
    expect(zonesCompared([mean(1, 22), mean(2, 23.1)], { confidence: 0.95, asked: 4 }).differ).toBe(false);
    expect(close).toMatchObject({ lowest: 1, highest: 2 });
    expect(close.difference).toBeCloseTo(1.1, 12);
    // qt(0.975, 22)·√(2/12) = 0.8467
    expect(close.halfWidth).toBeCloseTo(0.8467, 3);
  });

  it('calls zones different only when the range that is printed leaves no difference out', () => {
    // Four zones: the variance ratio is significant, but six pairs are asked, and the widest gap has a range over 0.
    // F = 4.51 on 3 and 44; both densities integrated by a script of its own (Simpson): p 0.00763763, t(22) 3.487973.
    const four = zonesCompared([mean(1, 22), mean(2, 22), mean(3, 23.3), mean(4, 22.4)], { confidence: 0.95, asked: 4 });
    expect(four.p!).toBeCloseTo(0.00763763, 6);
    expect(four.halfWidth!).toBeCloseTo(1.423959, 4);
    expect(four.difference).toBeLessThan(four.halfWidth!);
    expect(four.differ).toBe(false);
  });

  it('takes a weighed zone as every vine picked, with the scale and the bins', () => {
    const apart = weighedYield({ kg: 8000, areaHa: 1, vines: 1600, bins: 0 });
    expect(apart.value).toBe(8);
    expect(apart.standardError).toBeCloseTo(8 * Math.sqrt(0.01 ** 2 + 0.005 ** 2), 12);
    expect(weighedYield({ kg: 8000, areaHa: 1, vines: 1600, bins: 16 }).standardError).toBeCloseTo(8 * Math.sqrt(0.01 ** 2 + 0.005 ** 2 + 0.025 ** 2), 12);
  });

  it('keeps, merges or retires, and says when it cannot tell', () => {
    expect(zoneVerdict({ zones: 3, thisSeason: true, lastSeason: false })).toBe('keep');
    expect(zoneVerdict({ zones: 3, thisSeason: false, lastSeason: null })).toBe('merge');
    expect(zoneVerdict({ zones: 3, thisSeason: false, lastSeason: true })).toBe('merge');
    expect(zoneVerdict({ zones: 3, thisSeason: false, lastSeason: false })).toBe('retire');
    expect(zoneVerdict({ zones: 3, thisSeason: null, lastSeason: false })).toBe('notRead');
    expect(zoneVerdict({ zones: 1, thisSeason: null, lastSeason: null })).toBe('oneZone');
  });
});

describe('the season letter', () => {
  const figure = (value: number, halfWidth: number) => ({ value, standardError: halfWidth / 1.96, halfWidth, n: null, confidence: 0.95, kind: 'estimated' as const });
  const letter: SeasonLetter = {
    language: 'en', size: 'A4', units: 'metric', now: new Date('2026-12-01T12:00:00Z'), timeZone: 'UTC', estateName: 'Low House', seasonName: '2026',
    block: {
      blockId: 'b', blockName: 'West Plot', zones: 2, lastSeason: null, oneLot: true, readings: 240, hours: 5.2, errorParts: [], verdict: 'merge', sugar: { taken: 40, needed: 24 },
      measures: [{ measure: 'brix', basis: 'readings', unit: '°Brix', on: '2026-09-14', n: 40, lowest: 1, highest: 2, least: 22.1, most: 22.4, difference: 0.3, halfWidth: 0.8, p: 0.4, differ: false, betweenShare: 0.02 }],
    },
    zones: [1, 2].map((zone) => ({ blockId: 'b', blockName: 'West Plot', zone, forecastOn: '2026-08-20', forecast: figure(10, 3), actualT: 11, how: 'shared' as const, held: true })),
    errorParts: [{ part: 'rest', tonnes: 2 }],
  };

  it('says what was expected, what came, what it cost and what to do less of', () => {
    const said = letterParts(letter).flat();
    expect(said[0]).toBe('On 20 August 2026 20.0 ± 4.2 t were expected from the zones that were weighed; 22.0 t came over the scale. The range held.');
    expect(said).toContain('No difference could be told this season. Consider one block, and test once more before you give the zones up.');
    expect(said).toContain('All of it was picked into one lot, so the zones made no wine of their own.');
    expect(said).toContain('Knowing it took about 5 hours at the vine for 240 readings, without the walk.');
    expect(said.at(-1)).toBe('Next season take fewer: on the last visit 40 readings of sugar were taken where 24 would have kept the margin.');
  });

  it('speaks of weighed yield where the scale had the zones, and of none where loads were shared out', () => {
    const line = (basis: 'weighed' | 'shared') => ({ ...letter.block.measures[0]!, measure: 'yield', basis, unit: 't/ha', difference: 1.3, halfWidth: basis === 'shared' ? null : 0.4, differ: basis === 'shared' ? null : true });
    const said = (basis: 'weighed' | 'shared') => letterParts({ ...letter, block: { ...letter.block, measures: [line(basis)] } })[1]!;
    expect(said('weighed')[0]).toBe('Weighed yield differed between zones by 1.3 ± 0.4 t/ha: more than luck explains.');
    expect(said('shared').join(' ')).not.toMatch(/yield/);
  });

  it('gives short tons in the reader\'s words, apart from their figure', () => {
    const line = { ...letter.block.measures[0]!, measure: 'yield', basis: 'weighed' as const, unit: 't/ha', difference: 2.2417, halfWidth: 0.22417, differ: true };
    const said = (language: SeasonLetter['language']) => letterParts({ ...letter, language, units: 'us', block: { ...letter.block, measures: [line] } }).flat().join(' ');
    expect(said('en')).toMatch(/24\.3 short tons came over the scale.* by 1\.0 ± 0\.1 tons\/ac:/);
    expect(said('fr')).toMatch(/24,3 t courtes sont passées.* de 1,0 ± 0,1 t courtes\/ac :/);
    for (const language of ['es', 'fr', 'it', 'pt'] as const) expect(said(language)).not.toMatch(/short|tons/);
  });

  it('counts one as one in every language, and short times in minutes', () => {
    const cost = (language: SeasonLetter['language'], readings: number, hours: number) => letterParts({ ...letter, language, block: { ...letter.block, readings, hours, sugar: null } })[2]!.join(' ');
    expect(cost('en', 1, 0.02)).toBe('Knowing it took about 1 minute at the vine for 1 reading, without the walk.');
    expect(cost('fr', 40, 0.8)).toMatch(/environ 48 minutes au cep pour 40 relevés/);
    expect(cost('it', 1, 2)).toMatch(/circa 2 ore ai ceppi per 1 lettura/);
    expect(cost('pt', 0, 0)).toBe('Não há registo de leituras desta campanha.');
    const heldInOne = { ...letter, zones: letter.zones.map((zone, at) => ({ ...zone, held: at === 0 })) };
    expect(letterParts({ ...heldInOne, language: 'it' })[0]![0]).toMatch(/ha tenuto per 1 delle 2 zone\.$/);
    expect(letterParts({ ...heldInOne, language: 'fr' })[0]![0]).toMatch(/a tenu pour 1 des 2 zones\.$/);
  });

  it('joins article and preposition where the language does', () => {
    const parts = ['vines', 'clusters', 'clusterWeight', 'growth', 'losses', 'rest'] as const;
    for (const language of ['es', 'fr', 'it', 'pt'] as const) for (const part of parts) {
      const said = letterParts({ ...letter, language, errorParts: [{ part, tonnes: 2 }] })[0]!.at(-1)!;
      expect(said).toMatch(/2,0 t\)\.$/);
      expect(said).not.toMatch(/ (de (el|le|les|o|a|os|as)|da (il|la|le|lo|i)) /);
    }
    expect(letterParts({ ...letter, language: 'es', errorParts: [{ part: 'vines', tonnes: 2 }] })[0]!.at(-1)).toBe('La mayor parte de la diferencia vino del recuento de cepas (2,0 t).');
    expect(letterParts({ ...letter, language: 'pt' })[0]!.at(-1)).toMatch(/veio do que não voltou a ser medido/);
  });

  it('does not pretend to a test that was not made', () => {
    expect(letterParts({ ...letter, zones: [], errorParts: [] })[0]![0]).toBe('Nothing was weighed for this block, so the forecast was not tested.');
  });
});

describe('ripening simulated', () => {
  it('holds 95 % bands in 93 to 97 of 100 on a straight truth, and calls noise a change at the nominal rate', () => {
    const how = { seasons: 3000, random: seededRandom(12) };
    const linear = { id: 'linear' as const, brixAt: (day: number) => 17 + 0.2 * day };
    for (const visits of [3, 5]) {
      const { visitHeld } = forecastCoverage({ truth: linear, visits, vines: 12, confidence: 0.95 }, how);
      expect(visitHeld).toBeGreaterThan(0.93);
      expect(visitHeld).toBeLessThan(0.97);
    }
    for (const guard of ['newVines', 'sameVines', 'slope'] as const) {
      const { alarms } = falseAlarms(guard, 0.95, how);
      // Binomial sd 0.004 at 3000 seasons.
      expect(alarms).toBeGreaterThan(0.035);
      expect(alarms).toBeLessThan(0.065);
    }
  });
});
