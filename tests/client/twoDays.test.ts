import { describe, expect, it } from 'vitest';
import type { RipeningSeries, RipeningView } from '../../shared/contracts/results.ts';
import { fitTrend } from '../../shared/ripening/trend.ts';
import TwoDays from '../../src/components/ripeness/TwoDays.vue';
import { i18n, showLanguage } from '../../src/lib/i18n.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const brix = { code: 'brix', name: 'Sugar', unit: '°Brix', decimals: 1, marginKind: 'absolute', margin: 0.5, confidence: 0.95, secondsPerSample: 60 } as const;
/** 1 September 2026 in days since 1970. */
const first = 20_697;
const seriesOf = (days: readonly number[], values: readonly number[], { sd = 0.8 as number | null, otherWay = 0 } = {}): RipeningSeries => {
  const points = days.map((day, at) => ({ day: first + day, value: values[at]! }));
  const trend = fitTrend(points.slice(otherWay), { confidence: 0.95 });
  return { zone: 1, measure: 'brix', points: points.map((point) => ({ ...point, visit: '', halfWidth: 0.5, n: 8, provisional: 0, isFinal: false })), change: null, trend, bend: null, forecast: [], otherWay, sd } as RipeningSeries;
};
async function said(series: RipeningSeries, { target = null as number | null, days = null as readonly [string, string] | null } = {}): Promise<string> {
  const view = { zones: [{ id: 'z', number: 1, name: 'Crest', bearing: 900 }], series: [series] } as unknown as RipeningView;
  const shown = await mountWithTexts(TwoDays, { props: { view, measure: brix, target } as never });
  const fields = shown.findAll('input[type=date]');
  for (const [at, day] of (days ?? []).entries()) await fields[at]!.setValue(day);
  const text = textOf(shown.find('.answer').element);
  shown.unmount();
  return text;
}
// The worked line of five visits: slope 0.201235 a day, 24.5 °Brix on day 31.29, 29.93 to 32.83 (checked against R, lm and Fieller's limits).
const worked = seriesOf([0, 7, 14, 21, 26], [18.2, 19.6, 21.1, 22.3, 23.5]);

describe('one day or the other', () => {
  it('says the date of a target with its limits and its confidence', async () => {
    expect(await said(worked, { target: 24.5 })).toContain('24.5 °Brix about 2 Oct, between 30 Sept and 4 Oct (95 %).');
  });

  it('gives the difference and what one more visit would read with their ranges', async () => {
    const text = await said(worked, { days: ['2026-10-01', '2026-10-04'] });
    // 3 days of 0.2012 (0.1867 to 0.2158); day 30: 24.240 (23.831 to 24.650); t(0.975; 14) · 0.8 · √(2/8) = 0.858.
    expect(text).toMatch(/Expected difference 0\.60 ± 0\.04 °Brix; 8 readings a day show only 0\.9 °Brix and more\. 15 readings on each day would show it\./);
    expect(text).toContain('Thu 1 Oct 24.2 ± 0.4 °Brix');
  });

  it('puts no date a year away, nor one whose later limit has run away', async () => {
    expect(await said(worked, { target: 9_999_999 })).toContain('by the trend it would take more than a year');
    // Fieller's g is 0.955: 36.5 to 2056.9 days by scipy.
    const scattered = seriesOf([0, 7, 14, 21, 28], [20, 21.3, 20.9, 21.4, 22.1]);
    expect(await said(scattered, { target: 24 })).toContain('24.0 °Brix not before 7 Oct (95 %); how late cannot be told.');
  });

  it('warns of a date further ahead than the visits reach back', async () => {
    expect(await said(worked, { target: 29.5 })).toContain('further ahead than the visits reach back');
    expect(await said(worked, { target: 24.5 })).not.toContain('further ahead');
  });

  it('counts only visits on one line, and asks for no days where the spread is what is missing', async () => {
    const mixed = seriesOf([0, 7, 14, 21], [20, 21, 22, 23], { otherWay: 2 });
    expect(await said(mixed)).toContain('2 visits so far; it takes 3.');
    expect(await said({ ...worked, sd: null })).toContain('One reading on the last visit says nothing of the spread.');
  });

  it('ends a sentence with one stop where the date has its own', async () => {
    await mountWithTexts(TwoDays, { language: 'fr', props: { view: { zones: [], series: [worked] }, measure: brix, target: null } as never });
    const said = i18n.global.t('ripeness.visit', { day: '22 nov.' });
    expect(said).toMatch(/22 nov\.$/);
    expect(said).not.toContain('..');
    await showLanguage('en');
  });

  it('takes days after the last visit only', async () => {
    expect(await said(worked, { days: ['2026-09-10', '2026-10-04'] })).toContain('choose two days after the last visit');
    expect(await said(worked, { days: ['2026-10-04', '2046-10-04'] })).toContain('choose two days after the last visit');
  });
});
