import { describe, expect, it } from 'vitest';
import { matchScore, wordsOf } from '../../shared/search/matchScore.ts';

describe('finding a name by what was typed', () => {
  it('takes no notice of accents, case and signs between words', () => {
    expect(wordsOf('Côte-d’Or  2')).toEqual(['cote', 'd', 'or', '2']);
    expect(matchScore('Véraison', 'VERAISON')).toBe(1);
    expect(matchScore('Lucía Serra', 'lucia')).toBeGreaterThan(0.8);
  });

  it('asks that every word typed is answered', () => {
    expect(matchScore('Long Furrow', 'long gate')).toBe(0);
    expect(matchScore('Long Furrow', 'furrow long')).toBeGreaterThan(0.9);
  });

  it.each([['furow', 'a letter left out'], ['furrrow', 'one too many'], ['furrwo', 'two swapped'], ['firrow', 'one exchanged']])('%s finds Furrow (%s)', (typed) => {
    expect(matchScore('Long Furrow', typed)).toBeGreaterThan(0);
  });

  it('forgives no slip in a word under four letters, and not two', () => {
    expect(matchScore('Gate', 'gta')).toBe(0);
    expect(matchScore('Furrow', 'fxrrxw')).toBe(0);
  });

  it('puts the whole name before its beginning, that before its middle, and a slip last', () => {
    const scores = ['furrow', 'fur', 'urro', 'furow'].map((typed) => matchScore('Furrow', typed));
    expect([...scores].sort((a, b) => b - a)).toEqual(scores);
    expect(new Set(scores).size).toBe(4);
  });

  it('answers nothing to nothing', () => {
    expect(matchScore('Furrow', '  ')).toBe(0);
    expect(matchScore('', 'furrow')).toBe(0);
  });
});
