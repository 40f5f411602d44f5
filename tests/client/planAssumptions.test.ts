import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import PlanDraw from '../../src/components/sampling/PlanDraw.vue';
import PlanPace from '../../src/components/sampling/PlanPace.vue';
import { planChoices, type PlanChoices } from '../../shared/contracts/planChoices.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

const choices = planChoices.parse({ measures: [{ code: 'clusterCount' }] });

/** A field by the words that stand above it. */
function field(label: string) {
  const found = wrapper.findAll('label').find((one) => textOf(one.element) === label);
  if (!found) throw new Error(`no field "${label}"`);
  return { input: wrapper.find<HTMLInputElement>(`#${found.attributes('for')}`), help: () => textOf(found.element.closest('.field')?.querySelector('p')) };
}

describe('slopes on the walk', () => {
  // 400 m at 3.01 km/h, 100 m of it at 10 %, 50 m at 20 %, 50 m at 40 %.
  const walks = [{ vines: 10, levelS: 400 / 0.836, slopedS: 200 / 0.836 + 100 / 0.694 + 50 / 0.448 + 50 / 0.243, slopesM: [200, 100, 50, 50] }];

  it('are fields with their starting values, and the time on foot answers at once', async () => {
    wrapper = await mountWithTexts(PlanPace, { props: { modelValue: choices, walks, visits: 10, 'onUpdate:modelValue': (modelValue: PlanChoices) => wrapper.setProps({ modelValue }) } });
    expect(['5 to 15 % steep', '15 to 30 % steep', 'over 30 % steep'].map((label) => field(label).input.element.value)).toEqual(['83', '54', '29']);
    expect(field('5 to 15 % steep').help()).toBe('25 % of the way here');
    // (200 / 0.836 + 144 + 112 + 206 s) and 478 s, by hand
    expect(textOf(wrapper.find('[role=status]').element)).toBe('On foot 12 min; on level ground 8 min.');
    await field('over 30 % steep').input.setValue('10');
    expect(wrapper.emitted<[PlanChoices]>('update:modelValue')!.at(-1)![0].pace.slopeSpeeds).toEqual([0.694 / 0.836, 0.448 / 0.836, 0.1]);
    // 50 m at a tenth of 0.836 m/s: 598 s in place of 206
    expect(textOf(wrapper.find('[role=status]').element)).toBe('On foot 18 min; on level ground 8 min.');
  });

  it('are said to change nothing where there are none', async () => {
    wrapper = await mountWithTexts(PlanPace, { props: { modelValue: choices, walks: [{ vines: 10, levelS: 478, slopedS: 478, slopesM: [400, 0, 0, 0] }], visits: 10 } });
    expect(textOf(wrapper.find('[role=status]').element)).toContain('slopes change nothing');
  });
});

describe('seed of a draw', () => {
  it('is typed as a whole number and empty for a draw by lot', async () => {
    wrapper = await mountWithTexts(PlanDraw, { props: { modelValue: choices, seed: null, zones: [] } });
    const { input } = field('Seed of the draw');
    expect(input.element.value).toBe('');
    expect(input.attributes('placeholder')).toBe('by lot');
    await input.setValue('20250917');
    expect(wrapper.emitted('update:seed')).toEqual([[20250917]]);
    await input.setValue('');
    expect(wrapper.emitted('update:seed')!.at(-1)).toEqual([null]);
  });

  it('refuses a number that no draw takes, and keeps the one before', async () => {
    wrapper = await mountWithTexts(PlanDraw, { props: { modelValue: choices, seed: 5, zones: [] } });
    await field('Seed of the draw').input.setValue('2147483648');
    expect(field('Seed of the draw').help()).toContain('2 147 483 647');
    expect(wrapper.emitted('update:seed')).toBeUndefined();
  });

  it('stands as it was once vines are drawn, without spaces, and says how to get others', async () => {
    wrapper = await mountWithTexts(PlanDraw, { props: { modelValue: choices, seed: 1234567, isDrawn: true, zones: [] } });
    const { input, help } = field('Seed of the draw');
    expect(input.element.value).toBe('1234567');
    expect(input.element.disabled).toBe(true);
    expect(help()).toContain('keeps this draw on record');
  });
});
