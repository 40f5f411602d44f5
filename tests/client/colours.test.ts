import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { classColour, contrast, markOn, ownClassColours, rampColour, zoneSpan, zoneStyle } from '../../src/lib/colours.ts';

const css = readFileSync(resolve(import.meta.dirname, '../../src/assets/tokens.css'), 'utf8');

function tokensOf(selector: string): Record<string, string> {
  const body = css.slice(css.indexOf(`${selector} {`), css.indexOf('}', css.indexOf(`${selector} {`)));
  return Object.fromEntries([...body.matchAll(/--([a-z-]+):\s*(#[0-9A-F]{6})/gi)].map((match) => [match[1]!, match[2]!]));
}
const light = tokensOf(':root');
const themes = { light, dark: { ...light, ...tokensOf('.dark') }, outdoor: { ...light, ...tokensOf('.outdoor') }, night: { ...light, ...tokensOf('.outdoor'), ...tokensOf('.night') } };

describe('contrast', () => {
  // WCAG 2.2, 1.4.3 and 1.4.6: black on white is 21, white on white 1.
  it('is the WCAG ratio', () => {
    expect(contrast('#000000', '#FFFFFF')).toBeCloseTo(21, 6);
    expect(contrast('#777777', '#FFFFFF')).toBeCloseTo(4.48, 2);
  });

  it.each(Object.keys(themes) as (keyof typeof themes)[])('%s: words reach 4.5 on every ground they stand on', (theme) => {
    const token = themes[theme];
    const grounds = ['ground', 'sheet', 'tint', 'pick'];
    const words = ['ink', 'muted', 'slate', 'lees', 'moss', 'amber', 'brick', 'sky'];
    const weak = grounds.flatMap((ground) => words.map((word) => ({ pair: `${word} on ${ground}`, ratio: contrast(token[word]!, token[ground]!) }))).filter(({ ratio }) => ratio < 4.5);
    expect(weak).toEqual([]);
  });

  it.each(Object.keys(themes) as (keyof typeof themes)[])('%s: chips and filled buttons reach 4.5', (theme) => {
    const token = themes[theme];
    const pairs: [string, string][] = [['moss', 'moss-soft'], ['amber', 'amber-soft'], ['brick', 'brick-soft'], ['sky', 'sky-soft'], ['on', 'slate'], ['on', 'slate-deep'], ['on', 'lees'], ['mark-ink', 'mark'], ['sign-ink', 'moss'], ['sign-ink', 'brick']];
    expect(pairs.filter(([word, ground]) => contrast(token[word]!, token[ground]!) < 4.5)).toEqual([]);
  });

  // WCAG 2.2, 1.4.6.
  it.each(['outdoor', 'night'] as const)('%s: figures and words in the row reach 7, on every ground and sign', (theme) => {
    const token = themes[theme];
    const pairs: [string, string][] = [...['ink', 'muted', 'slate', 'brick', 'moss', 'amber', 'sky'].map((word): [string, string] => [word, 'ground']), ['on', 'slate'], ['mark-ink', 'mark'], ['sign-ink', 'moss'], ['sign-ink', 'brick']];
    expect(pairs.filter(([word, ground]) => contrast(token[word]!, token[ground]!) < 7)).toEqual([]);
  });

  it.each(Object.keys(themes) as (keyof typeof themes)[])('%s: borders of controls reach 3', (theme) => {
    const token = themes[theme];
    expect(contrast(token.line!, token.ground!)).toBeGreaterThanOrEqual(3);
    expect(contrast(token.line!, token.sheet!)).toBeGreaterThanOrEqual(3);
    // On a chosen line, borders take the muted colour instead.
    expect(contrast(token.muted!, token.pick!)).toBeGreaterThanOrEqual(3);
  });
});

describe('zones', () => {
  it('no two zones of a block share a fill or a pattern', () => {
    for (const set of ['ordered', 'unordered'] as const) {
      for (let count = 2; count <= 6; count++) {
        const styles = Array.from({ length: count }, (_, index) => zoneStyle(index + 1, { set, count }));
        expect(new Set(styles.map(({ fill }) => fill)).size).toBe(count);
        expect(new Set(styles.map(({ pattern }) => pattern)).size).toBe(count);
      }
    }
  });

  it('keep their colours and their order where a number is missing since two were joined', () => {
    const all = [1, 2, 3].map((number) => zoneStyle(number, { count: zoneSpan([{ number: 1 }, { number: 2 }, { number: 3 }]) }).fill);
    const left = [2, 3].map((number) => zoneStyle(number, { count: zoneSpan([{ number: 2 }, { number: 3 }]) }).fill);
    expect(left).toEqual(all.slice(1));
    expect(zoneSpan([])).toBe(0);
    const gaps = [1, 2, 5, 9].map((number) => zoneStyle(number, { count: zoneSpan([{ number: 9 }, { number: 1 }, { number: 5 }, { number: 2 }]) }).fill);
    expect(new Set(gaps).size).toBe(4);
  });

  it('marks on a fill are the better readable of ink and chalk', () => {
    for (let count = 1; count <= 6; count++) {
      for (let zone = 1; zone <= count; zone++) {
        const { fill, mark } = zoneStyle(zone, { count });
        const other = mark === '#1C2B33' ? '#F6F4EE' : '#1C2B33';
        expect(contrast(mark, fill) * 1.25).toBeGreaterThanOrEqual(contrast(other, fill));
      }
    }
    expect(markOn('#1C0E34')).toBe('#F6F4EE');
    expect(markOn('#EFFCDD')).toBe('#1C2B33');
  });
});

describe('ramps', () => {
  it('begin and end with their first and last stop, and hold beyond', () => {
    expect(rampColour('vigour', 0)).toEqual([0x1c, 0x0e, 0x34]);
    expect(rampColour('vigour', 1)).toEqual([0xef, 0xfc, 0xdd]);
    expect(rampColour('vigour', 7)).toEqual(rampColour('vigour', 1));
  });

  it('a difference of nothing is the pale middle', () => {
    expect(rampColour('difference', 0.5)).toEqual([0xec, 0xe5, 0xe0]);
  });
});

describe('classes of soil', () => {
  it('take the colours that people gave them, the others keep theirs', () => {
    const own = ownClassColours([{ value: 0, colour: null }, { value: 1, colour: '#C08030' }]);
    expect(own).toEqual({ 1: '#C08030' });
    expect([classColour(1, own), classColour(0, own)]).toEqual(['#C08030', classColour(0)]);
  });
});
