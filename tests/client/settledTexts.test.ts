import { afterAll, describe, expect, it } from 'vitest';
import { i18n } from '../../src/lib/i18n.ts';

const { global } = i18n;

describe('texts as they are settled', () => {
  afterAll(() => {
    global.locale.value = 'en' as never;
  });
  const said = (language: string, day: string) => {
    global.locale.value = language as never;
    global.mergeLocaleMessage(language, { settled: { range: 'dal {day} al {day}, il {day}.' } } as never);
    return global.t('settled.range', { day });
  };

  it('elides Italian articles before eight and eleven, and before no other number', () => {
    expect(said('it', '8 set')).toBe('dall’8 set all’8 set, l’8 set.');
    expect(said('it', '11 set')).toBe('dall’11 set all’11 set, l’11 set.');
    expect(said('it', '18 set')).toBe('dal 18 set al 18 set, il 18 set.');
  });

  it('breaks no French line before a sign of punctuation', () => {
    global.locale.value = 'fr' as never;
    global.mergeLocaleMessage('fr', { settled: { signs: 'Vraiment ? Oui : « tel quel » ; voilà !' } } as never);
    expect(global.t('settled.signs')).toBe('Vraiment\u202F? Oui\u00A0: «\u00A0tel quel\u00A0»\u202F; voilà\u202F!');
  });

  it('keeps a percent sign with its number in every language', () => {
    for (const language of ['en', 'es', 'fr']) {
      global.locale.value = language as never;
      global.mergeLocaleMessage(language, { settled: { share: '< 50 %, {n} %.' } } as never);
      expect(global.t('settled.share', { n: 75 })).toBe('< 50\u00A0%, 75\u00A0%.');
    }
  });

  it('leaves Spanish as it is and ends no sentence twice', () => {
    expect(said('es', '8 sept.')).toBe('dal 8 sept. al 8 sept., il 8 sept.');
  });
});
