import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import ActionButton from '../../src/components/base/ActionButton.vue';
import EvidenceMark from '../../src/components/base/EvidenceMark.vue';
import { sharedScale, type Evidence } from '../../src/components/base/evidence.ts';
import GutterBar from '../../src/components/base/GutterBar.vue';
import NumberField from '../../src/components/base/NumberField.vue';
import ProblemNote from '../../src/components/base/ProblemNote.vue';
import ProgressRow from '../../src/components/base/ProgressRow.vue';
import QuietState from '../../src/components/base/QuietState.vue';
import TextField from '../../src/components/base/TextField.vue';
import { HttpProblem, offlineProblem } from '../../src/lib/httpProblem.ts';
import { thinSpace } from '../../shared/numberText.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

const sugar: Evidence = { value: 23.4, halfWidth: 0.5, unit: '°Brix', n: 13, confidence: 0.95, kind: 'measured' };

describe('text field', () => {
  it('says that no more fits before the browser cuts a long text without a word', async () => {
    wrapper = await mountWithTexts(TextField, { props: { label: 'Name', maxlength: 80, modelValue: 'a'.repeat(79) } });
    expect(wrapper.find('.field-doubt').exists()).toBe(false);
    await wrapper.setProps({ modelValue: 'a'.repeat(80) });
    expect(textOf(wrapper.find('.field-doubt').element)).toBe('No more than 80 characters fit.');
    await wrapper.setProps({ maxlength: 8, modelValue: '12345678' });
    expect(wrapper.find('.field-doubt').exists()).toBe(false);
  });
});

describe('evidence mark', () => {
  it('is read aloud as one sentence', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: sugar, spokenUnit: 'degrees Brix' } });
    expect(textOf(wrapper.find('.for-reader').element)).toBe('23.4 plus or minus 0.5 degrees Brix, 13 readings, 95 percent, measured');
  });

  it('prints value, half-width, unit, n and confidence, and the word where it is not measured', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, kind: 'estimated' } } });
    expect(textOf(wrapper.find('.figure-line').element)).toBe('23.4± 0.5°Brix');
    expect(textOf(wrapper.find('.print').element)).toBe('n 13 · 95 % · estimated');
  });

  it('an assumed figure has no n', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, n: null, kind: 'assumed' } } });
    expect(textOf(wrapper.find('.print').element)).toBe('95 % · assumed');
  });

  it('one reading has no range, and says so', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, n: 1, halfWidth: null } } });
    expect(textOf(wrapper.find('.single').element)).toBe('One reading of 23.4 °Brix. No range from one.');
    expect(wrapper.find('svg').exists()).toBe(false);
  });

  it('readings that are all equal have their mark in the middle', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, halfWidth: 0 }, trackWidth: 100 } });
    expect(wrapper.find('.value').attributes('d')).toBe('M50 1V13');
    expect(wrapper.find('svg').html()).not.toContain('NaN');
  });

  it('bars share a scale: equal half-widths are equally long whatever the value', async () => {
    const scale = sharedScale([sugar, { ...sugar, value: 20.9 }])!;
    const widths: number[] = [];
    for (const value of [23.4, 20.9]) {
      wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, value }, scale, trackWidth: 100 } });
      widths.push(Number(wrapper.find('.body').attributes('width')));
      wrapper.unmount();
    }
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: sugar } });
    expect(widths[0]).toBeCloseTo(widths[1]!, 6);
    // Ends 20.4 and 23.9, a twentieth (0.175) added at both: 1 °Brix of 3.85 on 100 px.
    expect(widths[0]).toBeCloseTo(100 / 3.85, 6);
  });

  it('a body wider than the track is cut and says so', async () => {
    wrapper = await mountWithTexts(EvidenceMark, { props: { evidence: { ...sugar, halfWidth: 5 }, scale: [22, 24] } });
    expect(textOf(wrapper.find('.print').element)).toContain('range cut at the edge');
  });
});

describe('gutter', () => {
  const at = 600;
  it.each([
    ['ArrowLeft', {}, 584], ['ArrowRight', {}, 616], ['ArrowRight', { shiftKey: true }, 664], ['Home', {}, 0], ['End', {}, 1000], ['Enter', {}, 500],
  ])('%s %o puts it at %i', async (key, options, to) => {
    wrapper = await mountWithTexts(GutterBar, { props: { modelValue: at, label: 'Width', max: 1000, home: 500 } });
    const bar = wrapper.find('[role=separator]');
    expect(bar.attributes('aria-valuenow')).toBe('60');
    await bar.trigger('keydown', { key, ...options });
    expect(wrapper.emitted('update:modelValue')).toEqual([[to]]);
  });
});

describe('number field', () => {
  const field = (props: Record<string, unknown>) => mountWithTexts(NumberField, { props: { modelValue: null, label: 'Sugar', unit: '°Brix', decimals: 1, 'onUpdate:modelValue': (modelValue: number | null) => wrapper.setProps({ modelValue } as never), ...props } as never });
  const last = () => (wrapper.emitted('update:modelValue') ?? []).at(-1)?.[0];

  it('takes a decimal comma and keeps 0 as a value', async () => {
    wrapper = await field({});
    await wrapper.find('input').setValue('23,4');
    expect(last()).toBe(23.4);
    await wrapper.find('input').setValue('0');
    expect(last()).toBe(0);
    await wrapper.find('input').setValue('');
    expect(last()).toBeNull();
  });

  it('refuses what is no number and what is beyond the limits, with a sentence, and keeps the last good value', async () => {
    wrapper = await field({ modelValue: 20, max: 40 });
    await wrapper.find('input').setValue('twenty');
    expect(textOf(wrapper.find('[role=alert]').element)).toBe('“twenty” is not a number. Write it like 12.5.');
    await wrapper.find('input').setValue('41');
    expect(textOf(wrapper.find('[role=alert]').element)).toBe('At most 40.0.');
    expect(wrapper.find('input').attributes('aria-invalid')).toBe('true');
    expect(last()).toBeUndefined();
    // No form is sent with the number that was taken before, and one that is set from elsewhere stands unrefused.
    expect((wrapper.find('input').element as HTMLInputElement).validationMessage).toBe('At most 40.0.');
    await wrapper.setProps({ modelValue: 12 });
    expect([(wrapper.find('input').element as HTMLInputElement).value, (wrapper.find('input').element as HTMLInputElement).validity.valid]).toEqual(['12.0', true]);
    expect(wrapper.find('[role=alert]').exists()).toBe(false);
  });

  it('only asks about an unusual value and takes it', async () => {
    wrapper = await field({ doubtAbove: 30 });
    await wrapper.find('input').setValue('32.4');
    expect(last()).toBe(32.4);
    expect(wrapper.text()).toContain('Higher than usual (30.0). Is it right?');
    expect(wrapper.find('[role=alert]').exists()).toBe(false);
  });

  it('never writes a figure that was typed as another one, and rounds what was reckoned', async () => {
    for (const [typed, shown] of [['0,25', '0.25'], ['0.01', '0.01'], ['0.001', '0.001'], ['0.00004', '0.00004'], ['5.0649', '5.1'], ['12', '12.0'], ['0', '0.0']] as const) {
      wrapper = await field({});
      await wrapper.find('input').setValue(typed);
      await wrapper.find('input').trigger('change');
      expect((wrapper.find('input').element as HTMLInputElement).value).toBe(shown);
      wrapper.unmount();
    }
    wrapper = await field({ min: 0.01 });
    await wrapper.find('input').setValue('0');
    expect(textOf(wrapper.find('[role=alert]').element)).toBe('At least 0.01.');
  });

  it('writes numbers the way of the language', async () => {
    wrapper = await mountWithTexts(NumberField, { language: 'fr', props: { modelValue: 4140.5, label: 'x', decimals: 1 } });
    expect((wrapper.find('input').element as HTMLInputElement).value).toBe(`4${thinSpace}140,5`);
  });
});

describe('button', () => {
  it('that cannot be used says why, can be reached, and does nothing', async () => {
    wrapper = await mountWithTexts(ActionButton, { props: { offBecause: 'Needs one more answer' }, slots: { default: 'Publish' } });
    const button = wrapper.find('button');
    expect(button.attributes('aria-disabled')).toBe('true');
    expect(document.getElementById(button.attributes('aria-describedby')!)?.textContent).toBe('Needs one more answer');
    await button.trigger('click');
    expect(wrapper.emitted('press')).toBeUndefined();
  });
});

describe('problem note', () => {
  it('says what the server said when it has no sentence of ours', async () => {
    wrapper = await mountWithTexts(ProblemNote, { props: { problem: new HttpProblem({ status: 422, code: 'selfCrossing', title: 'Cannot be used', detail: 'This outline crosses itself between corners 14 and 17.' }) } });
    expect(textOf(wrapper.find('[role=alert] h3').element)).toBe('This cannot be used as it is');
    expect(textOf(wrapper.find('[role=alert] p').element)).toBe('This outline crosses itself between corners 14 and 17.');
  });

  it('says common problems in the reader\'s language', async () => {
    wrapper = await mountWithTexts(ProblemNote, { language: 'es', props: { problem: offlineProblem() } });
    expect(textOf(wrapper.find('h3').element)).toBe('Sin cobertura');
    expect(wrapper.text()).toContain('No se ha cambiado nada');
    await wrapper.setProps({ problem: offlineProblem(undefined, { sent: true }) });
    expect(wrapper.text()).toContain('no se sabe si esto llegó');
  });
});

describe('quiet state', () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());

  it('loading shows nothing at first, ruled lines after 0.4 s, words after 10 s', async () => {
    wrapper = await mountWithTexts(QuietState, { props: { state: 'loading' }, slots: { default: 'You can leave; a note follows.' } });
    expect(wrapper.find('.lines').exists()).toBe(false);
    await vi.advanceTimersByTimeAsync(450);
    expect(wrapper.find('.lines').exists()).toBe(true);
    expect(wrapper.text()).not.toContain('You can leave');
    await vi.advanceTimersByTimeAsync(10_000);
    expect(wrapper.text()).toContain('Still working. You can leave; a note follows.');
  });
});

describe('progress', () => {
  it('is a row of which the walked part is told in percent', async () => {
    wrapper = await mountWithTexts(ProgressRow, { props: { label: 'Zoning', share: 0.25, ticks: 40 } });
    const bar = wrapper.find('[role=progressbar]');
    expect(bar.attributes('aria-valuenow')).toBe('25');
    expect(wrapper.find('.past').attributes('d')!.match(/M/g)).toHaveLength(10);
    expect(wrapper.find('.ahead').attributes('d')!.match(/M/g)).toHaveLength(30);
  });

  it('before anything is known it has no value', async () => {
    wrapper = await mountWithTexts(ProgressRow, { props: { label: 'Zoning', share: null } });
    expect(wrapper.find('[role=progressbar]').attributes('aria-valuenow')).toBeUndefined();
  });
});
