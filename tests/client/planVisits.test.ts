import { afterEach, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import PlanVisits from '../../src/components/sampling/PlanVisits.vue';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices, type PlanChoices } from '../../shared/contracts/planChoices.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

const spread = { kind: 'sd' as const, value: 0.9, cautious: 1.1, source: 'trade' as const, n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 22, isMeanAssumed: true };
const basis: PlanBasis = {
  zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
  zones: [{ id: '', number: 1, name: 'Top', colour: null, vines: 9000, eligible: 9000 }],
  measures: [{ code: 'brix', name: '', unit: '°Brix', decimals: 1, margin: 0.5, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '', spreads: [spread], pilots: [null] }],
  walks: [], isWalkLaid: false, settings: { floorVines: 10, impracticalSamples: 60, dayHours: 8, costPerHour: 20, currency: 'EUR' },
};

it('the change that later visits show follows from how surely it shall be noticed', async () => {
  // A margin of 2 leaves the floor of ten vines: 18 degrees of freedom with new ones.
  const choices = planChoices.parse({ measures: [{ code: 'brix', margin: 2 }], revisit: 'new', correlation: 0 });
  wrapper = await mountWithTexts(PlanVisits, { props: { modelValue: choices, answer: answerPlan(basis, choices), basis, measure: basis.measures[0]!, 'onUpdate:modelValue': (modelValue: PlanChoices) => wrapper.setProps({ modelValue }) } });
  const words = () => textOf(wrapper.find('.visits').element);
  // t tables: (2.101 + 0.862) · 0.9 · √(2/10) = 1.19; 2.101 alone gives 0.85 (R 4.2.2: 0.845605).
  expect(words()).toContain('noticed in 80 % of cases');
  expect(words()).toContain('1.19 °Brix with new ones');
  expect(words()).toContain('(2.101 + 0.8620) · 0.9000 · √(2 / 10) = 1.193');
  const label = wrapper.findAll('label').find((one) => textOf(one.element) === 'A change shall be noticed in')!;
  await wrapper.find(`#${label.attributes('for')}`).setValue('50');
  expect(words()).toContain('noticed in 50 % of cases');
  expect(words()).toContain('0.85 °Brix with new ones');
  expect(words()).toContain(': 2.101 · 0.9000 · √(2 / 10) = 0.8456');
});
