import { describe, expect, it } from 'vitest';
import { measures } from '../../shared/catalog/measures.ts';
import { minus, thinSpace } from '../../shared/numberText.ts';
import { createFormat } from '../../src/lib/format.ts';
import { readNumber } from '../../src/lib/readNumber.ts';
import { shownValue, storedValue } from '../../src/lib/units.ts';

const english = createFormat({ language: 'en', units: 'metric', timeZone: 'UTC' });
const french = createFormat({ language: 'fr', units: 'us', timeZone: 'UTC' });

describe('figures', () => {
  it('thousands stand apart by a thin space in every language, also four-digit ones', () => {
    for (const language of ['en', 'es', 'fr', 'it', 'pt'] as const) expect(createFormat({ language, units: 'metric' }).number(4140)).toBe(`4${thinSpace}140`);
  });

  it('the decimal sign is the language\'s', () => {
    expect(english.number(23.4, 1)).toBe('23.4');
    expect(french.number(23.4, 1)).toBe('23,4');
  });

  it('a negative figure has a true minus, and a figure that rounds to nothing has none', () => {
    expect(english.number(-0.5, 1)).toBe(`${minus}0.5`);
    expect(english.number(-0.04, 1)).toBe('0.0');
  });

  it('plus-minus and percent keep thin spaces', () => {
    expect(english.estimate(23.4, 0.5)).toBe(`23.4${thinSpace}±${thinSpace}0.5`);
    expect(english.percent(0.95)).toBe(`95${thinSpace}%`);
  });

  it('a figure that is no number is a dash, never NaN', () => {
    expect(english.number(Number.NaN, 1)).toBe('\u2013');
  });
});

// Factors: NIST SP 811 (2008), Appendix B.8: 1 acre = 4046.873 m², 1 ft = 0.3048 m, 1 short ton = 907.1847 kg, 1 US gal = 3.785412 L.
describe('units', () => {
  it.each([
    ['area', 0.4046873, 1],
    ['length', 0.3048, 1],
    ['fruitMass', 0.9071847, 1],
    ['volume', 3.785412, 1],
    ['temperature', 100, 212],
    ['temperature', -40, -40],
  ] as const)('%s of %f is shown as %f in US units', (quantity, stored, shown) => {
    expect(shownValue(quantity, stored, 'us')).toBeCloseTo(shown, 4);
  });

  it('units that are words are in the reader\'s language', () => {
    expect(french.withUnit('fruitMass', 0.9071847)).toBe(`1,0${thinSpace}t courtes`);
    expect(createFormat({ language: 'en', units: 'us' }).unit('yield')).toBe('tons/ac');
    for (const language of ['es', 'fr', 'it', 'pt'] as const) {
      const { unit } = createFormat({ language, units: 'us' });
      expect([unit('fruitMass'), unit('yield'), unit('volume'), unit('juice')].join('; ')).not.toMatch(/short|ton\b|tons|US gal/);
    }
  });

  it('units of measures that are words are in the reader’s language, symbols and an estate’s own as they stand', () => {
    expect(createFormat({ language: 'en', units: 'metric' }).unitWord('clusters')).toBe('clusters');
    for (const language of ['es', 'fr', 'it', 'pt'] as const) {
      const { unitWord } = createFormat({ language, units: 'metric' });
      expect(measures.map(({ unit }) => unitWord(unit)).filter((unit) => /^(clusters|berries)$/.test(unit))).toEqual([]);
      expect(new Set(measures.map(({ unit }) => unitWord(unit))).size).toBe(new Set(measures.map(({ unit }) => unit)).size);
      expect(unitWord('°Brix')).toBe('°Brix');
      expect(unitWord('leaves')).toBe('leaves');
    }
  });

  it('one short ton an acre is 2.2417 t/ha', () => {
    expect(storedValue('yield', 1, 'us')).toBeCloseTo(2.2417, 4);
  });

  it('150 US gallons a short ton are 625.9 L/t', () => {
    expect(storedValue('juice', 150, 'us')).toBeCloseTo(625.9, 1);
  });

  it('what is typed comes back as it was typed', () => {
    expect(shownValue('area', storedValue('area', 2.5, 'us'), 'us')).toBeCloseTo(2.5, 12);
    expect(shownValue('temperature', storedValue('temperature', 95, 'us'), 'us')).toBeCloseTo(95, 12);
  });
});

describe('dates', () => {
  it('a bare day is that day in every time zone', () => {
    const west = createFormat({ language: 'en', units: 'metric', timeZone: 'America/Los_Angeles' });
    expect(west.date('2026-08-27')).toBe('27 Aug');
    expect(west.date('2026-08-27', 'weekday')).toBe('Thu 27 Aug');
  });

  it('an instant is told in the estate\'s zone', () => {
    expect(createFormat({ language: 'en', units: 'metric', timeZone: 'Europe/Paris' }).time('2026-07-01T05:41:00Z')).toBe('07:41');
  });

  it('French counts the first of a month, and no other day', () => {
    const french = createFormat({ language: 'fr', units: 'metric' });
    expect(french.date('2026-09-01', 'weekday')).toBe('mar. 1er sept.');
    expect(french.date('2026-09-21', 'long')).toBe('lundi 21 septembre 2026');
    expect(french.date('2026-09-01')).toBe('1er sept.');
  });

  it('durations are hours and minutes', () => {
    expect(english.duration(460)).toBe(`7${thinSpace}h 40${thinSpace}min`);
    expect(english.duration(25)).toBe(`25${thinSpace}min`);
    expect(english.duration(120)).toBe(`2${thinSpace}h`);
  });
});

describe('typed numbers', () => {
  it.each([['23,4', 23.4], ['23.4', 23.4], ['4 140', 4140], [`4${thinSpace}140,5`, 4140.5], [`${minus}2`, -2], ['0', 0], ['', null], ['  ', null]])('%j is read as %j', (text, value) => {
    expect(readNumber(text)).toBe(value);
  });

  it.each(['1,2,3', '12 Brix', '--4', '1e5'])('%j is not a number', (text) => {
    expect(readNumber(text)).toBeNaN();
  });
});
