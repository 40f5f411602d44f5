import { describe, expect, it } from 'vitest';
import { tableText } from '../../server/exporters/tableText.ts';

const fields = ['name', 'row', 'longitude', 'note'];
const lines = [{ name: '=Été; "2ª"', row: '-7', longitude: { value: -7.79123456789, decimals: 7 }, note: null }];

describe('a table for a spreadsheet', () => {
  it('has commas and decimal points in English', () => {
    expect(tableText(fields, lines, 'en')).toBe('\uFEFFname,row,longitude,note\r\n"\'=Été; ""2ª""",-7,-7.7912346,\r\n');
  });

  it.each(['es', 'fr', 'it', 'pt'])('has semicolons and decimal commas in %s', (language) => {
    expect(tableText(fields, lines, language)).toBe('\uFEFFname;row;longitude;note\r\n"\'=Été; ""2ª""";-7;-7,7912346;\r\n');
  });

  it('disarms what a spreadsheet with another separator would take for a cell of its own', () => {
    const rows = (language: string) => tableText(['cell'], ['a;=1+1', 'a,@SUM(1)', 'a\t-2+3', 'a; b, c-d'].map((cell) => ({ cell })), language).trim().split('\r\n').slice(1);
    expect(rows('en')).toEqual(["a;'=1+1", '"a,\'@SUM(1)"', "a\t'-2+3", '"a; b, c-d"']);
    expect(rows('it')).toEqual(['"a;\'=1+1"', "a,'@SUM(1)", "a\t'-2+3", '"a; b, c-d"']);
  });

  it('disarms what would be run, and leaves the sign of a figure', () => {
    const cells = ['=1+1', '+cmd', '-2+3', '@SUM(1)', '\tx', '-7', '+34', '-7,5', '- of the slope'];
    const [, ...rows] = tableText(['cell'], cells.map((cell) => ({ cell })), 'fr').trim().split('\r\n');
    expect(rows).toEqual(['"\'=1+1"', '"\'+cmd"', '"\'-2+3"', '"\'@SUM(1)"', '"\'\tx"', '-7', '+34', '-7,5', '"\'- of the slope"']);
  });
});
