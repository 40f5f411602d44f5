import { describe, expect, it } from 'vitest';
import type { Component } from 'vue';
import { noticeTexts } from '../../server/mail/noticeTexts.ts';
import { noticeText } from '../../server/services/lots/noticeWords.ts';
import { seasonLetterTexts } from '../../server/exporters/report/seasonLetterTexts.ts';
import { brixMethods, type BrixMethod, type LotView } from '../../shared/contracts/lots.ts';
import LotComposition from '../../src/components/lots/LotComposition.vue';
import ScenarioCompare from '../../src/components/lots/ScenarioCompare.vue';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

/** Potential alcohol, tonnes and dates stand nowhere without the words that say what they are not. */
const languages = ['en', 'es', 'fr', 'it', 'pt'] as const;
const texts = Object.fromEntries(await Promise.all(languages.map(async (language) => [language, { lots: ((await import(`../../src/locales/${language}/lots.json`)) as { default: unknown }).default }]))) as Record<(typeof languages)[number], { lots: { caution: string; cautionAlcohol: Record<BrixMethod, string>; alcoholUnit: Record<BrixMethod, string> } }>;
const figure = (value: number, halfWidth: number) => ({ value, halfWidth, standardError: halfWidth / 2, n: 6, confidence: 0.95, kind: 'estimated' as const });
const lot = (method: BrixMethod) =>
  ({
    id: 'a', name: 'Shelf red', pickOn: '2026-09-20', lines: [], stops: [], state: 'draft', tankId: null, wineType: 'red', version: 1, crew: '',
    summary: { areaHa: 1, vines: 900, bearing: 880, tonnes: figure(9, 2), dominating: 'growth', brix: figure(24, 0.4), ph: figure(3.4, 0.1), phViaHydrogen: 3.4, ta: figure(6, 0.3), weighting: 'tonnes', tankBrix: null, litreSource: { must: null, wine: null }, alcohol: { method, low: 13.0, middle: 14.2, high: 15.1 }, mustL: figure(8100, 1800), wineL: figure(6000, 1500), betweenShare: 0.2, tank: null, unknown: [] },
  }) as unknown as LotView;

describe('the words beside estimates', () => {
  it.each(brixMethods)('name the way to potential alcohol, by %s, and say that it is no label’s', async (method) => {
    const text = await shown(LotComposition, { lots: [lot(method)], confidence: 0.95, alcoholMethod: method });
    expect(text).toContain('13.0 – 15.1');
    expect(text).toContain(texts.en.lots.alcoholUnit[method]);
    expect(text).toContain('not the alcohol of a label');
    expect(text).toContain('estimates weighted by expected tonnes');
  });

  it('stand under what-ifs as well', async () => {
    const board = { scenarioId: 's', scenarios: [{ id: 's', name: 'In force', isLive: true }], alcoholMethod: 'brixFactor', zones: [], tanks: [], lots: [lot('brixFactor')] };
    const text = await shown(ScenarioCompare, { scenarios: board.scenarios, boards: [board], busy: false });
    expect(text).toContain('13.0–15.1 % vol potential alcohol (by factor)');
    expect(text).toContain('not the alcohol of a label');
    expect(text).toContain(texts.en.lots.caution);
  });

  it('are there in every language, on screens, in mails and in the letter', () => {
    for (const language of languages) {
      const { caution, cautionAlcohol, alcoholUnit } = texts[language].lots;
      expect(caution.length, language).toBeGreaterThan(40);
      for (const method of brixMethods) {
        expect(cautionAlcohol[method].length, language).toBeGreaterThan(40);
        expect(alcoholUnit[method], language).toMatch(/% vol, /);
      }
      // After the figure comes a sentence of its own that says what it is not.
      expect(noticeTexts[language].tonnes, language).toMatch(/\{tonnes\}\. \p{L}.{30,}/u);
      const told = (halfWidth: number | null) => noticeText({ lotName: 'Marl red', pickOn: '2026-09-12', fromTime: '07:00', zones: [], tonnes: { ...figure(24.1, 8.3), halfWidth }, tank: null, note: '' }, { language, replacesNumber: null, differences: [] });
      expect(told(8.3), language).toMatch(/ 24[.,]1 ± 8[.,]3 t\. \p{L}.{30,}/u);
      // A spread that is not known is left away, never told as none.
      expect(told(null), language).toMatch(/ 24[.,]1 t\. \p{L}.{30,}/u);
      expect(seasonLetterTexts[language].caution.length, language).toBeGreaterThan(40);
    }
  });
});

async function shown(component: Component, props: Record<string, unknown>): Promise<string> {
  return textOf((await mountWithTexts(component, { props } as never)).element).replace(/[\u202f\u00a0]/g, ' ');
}
