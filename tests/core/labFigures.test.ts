import { describe, expect, it } from 'vitest';
import { entryValues } from '../../shared/lab/entryText.ts';
import { markProved, readFigure } from '../../shared/lab/figure.ts';
import { labUnit } from '../../shared/lab/units.ts';
import { countedValue } from '../../shared/lab/belowDetection.ts';

const value = (text: string, mark: ',' | '.' | null = null) => {
  const figure = readFigure(text, mark);
  return figure.kind === 'number' ? (figure.below ? `<${figure.value}` : figure.value) : figure.kind;
};

describe('a figure in a cell', () => {
  it.each([
    ['23,4', 23.4], ['23.4', 23.4], ['0,123', 0.123], ['1.234,5', 1234.5], ['1,234.5', 1234.5], ['1 234,5', 1234.5], ["1'234.5", 1234.5], ['1\u202f234', 1234],
    ['23.4 °Brix', 23.4], ['23,4*', 23.4], ['3.42 ± 0.02', 3.42], ['<0.1', '<0.1'], ['< 0,1', '<0.1'], ['2.5E+01', 25], ['−2', -2], ['"6,1"', 6.1], ['.5', 0.5],
  ])('%s is read', (text, expected) => expect(value(text)).toBe(expected));

  it.each(['1,234', '1.234', '12,345'])('%s is decimals or thousands until somebody says', (text) => expect(value(text)).toBe('ambiguous'));
  it('follows the mark of its file where it is told', () => {
    expect(value('1,234', ',')).toBe(1.234);
    expect(value('1,234', '.')).toBe(1234);
  });
  it.each(['', '-', 'n.d.', 'N/A', '#DIV/0!', '<LOD', 'en cours'])('"%s" says that nothing was measured', (text) => expect(value(text)).toBe('none'));
  it.each(['>35', 'good', '12.3.4', '1 23', '23,4,5'])('"%s" is not read as a number', (text) => expect(value(text)).toBe('unreadable'));
  it('proves the decimal mark of a file or nothing', () => expect(['23,4', '23.4', '1.234.567', '1,234', '23'].map(markProved)).toEqual([',', '.', ',', null, null]));
});

describe('a cell of the typing grid', () => {
  it('takes point or comma, a limit and repeats', () => {
    expect(entryValues('23,4 / 23.6')).toEqual({ values: [{ value: 23.4, below: false, typed: '23,4' }, { value: 23.6, below: false, typed: '23.6' }] });
    expect(entryValues('< 0,1')).toEqual({ values: [{ value: 0.1, below: true, typed: '<0,1' }] });
    expect(entryValues('3,425')).toEqual({ values: [{ value: 3.425, below: false, typed: '3,425' }] });
    expect(entryValues('')).toEqual({ values: [] });
  });
  it('names what it cannot read', () => {
    expect(entryValues('23.4 abc')).toEqual({ problem: 'unreadable', at: 'abc' });
    expect(entryValues('1.234,5')).toEqual({ problem: 'thousands', at: '1.234,5' });
  });
});

/** Rows of the AOAC °Brix table as fitted by Hackbarth (2011), of Baumé 145(1 − 1/S), Oechsle 1000(S − 1), and of the molar masses of tartaric and sulphuric acid. */
describe('units of laboratories', () => {
  it.each([
    ['gravity', 1.08, 19.3523], ['gravity', 1.09, 21.5938], ['gravity', 1.1, 23.7996], ['gravity', 1100, 23.7996], ['baume', 13.1818, 23.7996], ['baume', 11.9725, 21.5938], ['oechsle', 90, 21.5938], ['oechsle', 110, 25.9709], ['solidsGPerL', 263.75, 24],
  ])('%s %d is %d °Brix', (unit, from, brix) => expect(labUnit(unit)!.convert(from)).toBeCloseTo(brix, 3));
  // Rows of table II of OIV-MA-AS2-02 (French order of 14 September 2011, annex IV) between those that the program holds.
  it.each([[87.5, 10.5], [141.6, 15.5], [197.6, 20.5], [209, 21.5], [220.5, 22.5], [230.8, 23.4], [244.8, 24.6], [267.1, 26.5], [301.7, 29.4], [82.2, 10], [308.9, 30]])('%d g/L of sugar is %d °Brix', (sugar, brix) => expect(labUnit('sugarGPerL')!.convert(sugar)).toBeCloseTo(brix, 1));
  it('knows no sugar outside that table', () => expect([82, 309, -1].map(labUnit('sugarGPerL')!.convert)).toEqual([Number.NaN, Number.NaN, Number.NaN]));
  it.each([['sulphuricGPerL', 4.5, 6.886199], ['meqPerL', 80, 6.00348], ['mmolPerL', 40, 6.00348], ['tartaricGPerL', 6, 6]])('%s %d is %d g/L as tartaric', (unit, from, to) => expect(labUnit(unit)!.convert(from)).toBeCloseTo(to, 5));
  it('cannot make °Brix of what is no density', () => expect([labUnit('gravity')!.convert(23), labUnit('solidsGPerL')!.convert(5000)]).toEqual([Number.NaN, Number.NaN]));
  it('counts half the limit of a figure below it', () => expect([countedValue(0.1, ['belowDetection']), countedValue(0.1, [])]).toEqual([0.05, 0.1]));
});
