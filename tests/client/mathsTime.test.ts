import { afterEach, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import MathsTime from '../../src/components/sampling/MathsTime.vue';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

const spread = { kind: 'sd' as const, value: 0.9, cautious: 1.1, source: 'trade' as const, n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 22, isMeanAssumed: true };
const basis: PlanBasis = {
  zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
  zones: [1, 2].map((number) => ({ id: '', number, name: '', colour: null, vines: 9000, eligible: 9000 })),
  measures: [{ code: 'brix', name: '', unit: '°Brix', decimals: 1, margin: 2, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '', spreads: [spread, spread], pilots: [null, null] }],
  walks: [{ vines: 20, levelS: 1000, slopedS: 1200 }], isWalkLaid: false, settings: { floorVines: 10, impracticalSamples: 60, dayHours: 8, costPerHour: 36, currency: 'EUR' },
};

it('the time of a plan and its cost can be followed by hand', async () => {
  // Ten vines in each of two zones, by the floor. 1 200 s on foot at 3.0096 km/h; 10 · 15 and 10 · 45 s; 20 · 60 s: 3 000 s.
  const choices = planChoices.parse({ measures: [{ code: 'brix', moneyPerSample: 2 }], zoneSeconds: { 2: 30 }, pace: { kmPerHour: 3.0096 } });
  wrapper = await mountWithTexts(MathsTime, { props: { answer: answerPlan(basis, choices), choices, currency: 'EUR', zoneName: (zone: string) => `Zone ${zone}`, measureName: () => '°Brix' } });
  const names = wrapper.findAll('dt').map(({ element }) => textOf(element));
  const sums = wrapper.findAll('dd').map(({ element }) => textOf(element));
  expect(Object.fromEntries(names.map((name, i) => [name, sums[i]]))).toEqual({
    'On foot': '1 200 s', 'Zone 1': '10 · 15 s = 150 s', 'Zone 2': '10 · (15 s + 30 s) = 450 s', '°Brix': '20 · 60 s = 1 200 s',
    'Work in all': '3 000 s = 50 min0.8333 h · 36.00 + 20 · 2.000 = 70 EUR',
  });
  expect(textOf(wrapper.find('.muted').element)).toContain('3.01 km/h, slopes counted');
});
