import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import PlanDraw from '../../src/components/sampling/PlanDraw.vue';
import { planChoices } from '../../shared/contracts/planChoices.ts';
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
