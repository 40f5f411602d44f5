import { describe, expect, it } from 'vitest';
import { reasonWords } from '../../src/components/imports/importWords.ts';
import type { ImportQuestion } from '../../shared/contracts/imports.ts';
import en from '../../src/locales/en/imports.json';
import type { Format } from '../../src/lib/format.ts';

/** Why a question is asked, as the desk says it. */

const texts = en.askWhy as Record<string, string>;
const te = (key: string) => key.startsWith('imports.askWhy.') && key.slice('imports.askWhy.'.length) in texts;
const t = (key: string, named: Record<string, unknown>) => texts[key.slice('imports.askWhy.'.length)]!.replace(/\{(\w+)\}/g, (_, name: string) => String(named[name]));
const words = { t, te, format: { number: String } as unknown as Format };
const question = (why: ImportQuestion['why']): ImportQuestion => ({ code: 'reference', kind: 'choice', reason: 'As the reader said it.', ...(why ? { why } : {}), choices: [], suggestion: null, answer: null, answered: false });

describe('the reason of a question', () => {
  it('has its values in the words of the screen', () => {
    expect(reasonWords(question({ code: 'degrees', params: { name: 'WGS 84 / UTM zone 37N', x: '38.4016', y: '8.1023' } }), words)).toBe('It is said to be in WGS 84 / UTM zone 37N, but its coordinates (38.4016, 8.1023) look like degrees.');
    expect(reasonWords(question({ code: 'far', params: { km: 5514, name: 'WGS 84' } }), words)).toBe('Read as WGS 84, it lies 5514 km from your estate.');
  });

  it('is the sentence of the reader where the screen has no words', () => {
    expect(reasonWords(question(undefined), words)).toBe('As the reader said it.');
    expect(reasonWords(question({ code: 'unheard-of', params: {} }), words)).toBe('As the reader said it.');
  });

  it('leaves no value unsaid: every value that a sentence names comes from the reader', () => {
    const given: Record<string, readonly string[]> = { 'not-named': [], 'no-prj': ['part'], unusable: ['name'], 'table-projection': [], 'not-degrees': [], degrees: ['name', 'x', 'y'], impossible: ['name', 'x', 'y'], far: ['km', 'name'], 'value-returns': ['percent', 'value'], 'mask-like': ['band', 'value', 'percent'] };
    expect(Object.fromEntries(Object.entries(texts).map(([code, text]) => [code, [...text.matchAll(/\{(\w+)\}/g)].map((match) => match[1]!).sort()]))).toEqual(Object.fromEntries(Object.entries(given).map(([code, names]) => [code, [...names].sort()])));
  });
});
